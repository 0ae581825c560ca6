import { assert, assertAlmostEquals, assertEquals, assertStringIncludes } from "@std/assert";
import { binaryFrom } from "../../engine/binary/mod.ts";
import { plateSection } from "../../engine/campaign/schema/plate_section.ts";
import { weighSubjects } from "../../engine/campaign/subject/weigh_subject.ts";
import { weighFigures } from "../../engine/campaign/weigh_figures.ts";
import type { Target } from "../../engine/campaign/mod.ts";
import { simulateTrail, weighRecord, weighTrail } from "../../engine/weighing/mod.ts";

const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
const common = { title: "VX-0417", binary };

const made = simulateTrail({
  parts: ["disc", "spot"],
  disc: { equivalent_width_kms: 3000 },
  spot: { equivalent_width_kms: 500, mixing: 0.4, sigma_kms: 60 },
}, { binary, exposures: 16, pixel_kms: 80, seed: 4 });
// A mask in the middle of each exposure: samples without an error.
const masked = { from: 900, to: 1300 };
const trail = {
  ...made,
  error: made.error.map((value, n) => {
    const v = made.sampling.velocity_kms[n]!;
    return v > masked.from && v < masked.to ? Infinity : value;
  }),
};
const sets = [["disc"], ["disc", "spot"]];
const weighed = await weighTrail(trail, { binary, sets, trials: 10, limit: false });

Deno.test("weighSubjects() lays data, model and residuals out on one grid, blank where masked", () => {
  const { best, rivals } = weighSubjects(weighed, common);
  const { rows, columns, first_kms, step_kms, flux } = best.trail!.grid;
  assertEquals(rows, 16);
  assertEquals(rivals.map(({ model_name }) => model_name), ["disc + spot", "disc"]);
  for (let k = 0; k < rows * columns; k++) {
    const v = first_kms + (k % columns) * step_kms;
    if (v > masked.from + 80 && v < masked.to - 80) assertEquals(flux[k], NaN);
    if (v < masked.from - 80 || (v > masked.to + 80 && v < 1800)) assert(Number.isFinite(flux[k]));
  }
  // A model with every true part leaves noise: its cells are those of the data, in standard deviations.
  const [first] = rivals;
  const squares = first!.residual!.filter(Number.isFinite).map((r) => r * r);
  const mean = squares.reduce((sum, r) => sum + r, 0) / squares.length;
  assertAlmostEquals(mean, 1, 0.15); // √(2/N) of about 700 samples is 0.05; fitted baselines take more
});

Deno.test("weighFigures() tells the numbers of weigh.json and draws each rival", async () => {
  const plate = plateSection.parse({ formats: ["svg"] });
  const target = { title: "VX-0417", settings: { plate, orbit: {} } } as unknown as Target;
  const files = await weighFigures({ target, binary: () => binary }, [weighed, weighed]);
  assertEquals(files.map(([name]) => name), [
    "weigh-plate.svg",
    "weigh-plate.txt",
    "weigh-plate-h-beta.svg",
    "weigh-plate-h-beta.txt",
  ]);
  const caption = String(files[1]![1]).replaceAll(/\s+/g, " ");
  const { false_alarm } = weighRecord(weighed);
  assertStringIncludes(
    caption,
    `Gain of χ² of disc + spot over disc: in ${false_alarm!.trials} trials of disc (grey), ` +
      `${false_alarm!.exceeding} of which gain as much as the data do`,
  );
  assertStringIncludes(caption, "Model of disc + spot, colours as for the trail");
  assertStringIncludes(caption, "Data less disc in standard deviations");
  const svg = String(files[0]![1]);
  assertEquals(svg.match(/data-name="residual"/g)?.length, 2);
  assertStringIncludes(svg, 'data-name="null-distribution"');
  assert(!/NaN|undefined/.test(caption));
});
