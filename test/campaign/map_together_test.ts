// One map of several lines at once: the same gas seen in each, at the strength of each.
import {
  assertAlmostEquals,
  assertEquals,
  assertLess,
  assertRejects,
  assertStringIncludes,
} from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { lineNamed } from "../../engine/sky/mod.ts";
import type { RawExposure } from "../../engine/spectra/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { SECTIONS, SOURCE, writeCampaign } from "./campaign_fixture.ts";

const RATIO = 0.5;
const FACTOR = lineNamed("He I 5016").vacuum_angstrom / lineNamed("H beta").vacuum_angstrom;

/** The exposures with H beta a second time, half as strong, where He I 5016 is. */
function twice(raw: readonly RawExposure[]): RawExposure[] {
  return raw.map((e) => {
    const { wavelength_angstrom: w, flux } = e;
    const level = flux.toSorted()[Math.floor(0.3 * flux.length)]!;
    const step = w[1]! - w[0]!;
    return {
      ...e,
      flux: flux.map((f, i) => {
        const at = (w[i]! / FACTOR - w[0]!) / step, k = Math.floor(at);
        if (w[i]! < 4960) return f;
        return f + RATIO * ((1 - at + k) * flux[k]! + (at - k) * flux[k + 1]! - level);
      }),
    };
  });
}

const second = SECTIONS.lines!.replace("H beta", "He I 5016");
const night = (together: string, lines = `${SECTIONS.lines}\n${second}`) =>
  writeCampaign([{
    raw: twice(madeExposures({
      high_angstrom: 5130,
      resolution_angstrom: 2.4,
      signal_to_noise: 15,
      count: 16,
      cadence_s: 430,
    })),
  }], { lines: lines.replace("reach_kms", `together = [${together}]\nreach_kms`) });

const SET = ["map.pixels=41", 'map.method="entropy"', "map.resamples=12", "map.structures=false"];

Deno.test("lines.together makes one map of both lines, with a smaller error than of one", async () => {
  const campaign = await night('{ line = "He I 5016" }');
  const session = await campaign.open(SET);
  const [line, other] = session.lines("test");
  const [both, alone] = [await session.map(line!), await session.map(other!)];
  const [joined] = both.together;
  assertEquals([joined!.line, joined!.ratio_from], ["He I 5016", "mean flux"]);
  // 16 exposures of S/N 15 know the mean flux to 1 %.
  assertAlmostEquals(joined!.ratio, RATIO, 0.03);
  assertEquals(alone.together, []);
  const trails = [await session.trail(line!), await session.trail(other!)];
  assertEquals(both.sample_count, trails.reduce((sum, { flux }) => sum + flux.length, 0));
  for (const map of [both, alone]) {
    const [first] = map.features;
    assertAlmostEquals(first!.vx_kms, SOURCE.vx_kms, 25);
    assertAlmostEquals(first!.vy_kms, SOURCE.vy_kms, 25);
  }
  const error = (map: typeof both) =>
    Math.hypot(map.features[0]!.vx_error_kms!, map.features[0]!.vy_error_kms!);
  // Alone, the weaker line has less than half of the signal.
  assertLess(error(both), 0.8 * error(alone));
});

Deno.test("lines.together takes a stated ratio, by every inversion", async () => {
  const campaign = await night(`{ line = "He I 5016", ratio = ${RATIO} }`);
  for (const method of ["back-projection", "total-variation"]) {
    const session = await campaign.open([...SET, `map.method="${method}"`, "map.resamples=2"]);
    const map = await session.map(session.lines("test")[0]!);
    assertEquals(map.together, [{ line: "He I 5016", ratio: RATIO, ratio_from: "target file" }]);
    assertAlmostEquals(map.features[0]!.vx_kms, SOURCE.vx_kms, 25);
    assertAlmostEquals(map.features[0]!.vy_kms, SOURCE.vy_kms, 25);
    // Rows of the display are those of the one line.
    assertEquals(map.residual.length, map.trail.grid.rows * map.trail.grid.columns);
  }
});

Deno.test("lines.together refuses a line that is not there, and what it cannot stand beside", async () => {
  const refused = async (together: string, set: readonly string[], lines?: string) => {
    const campaign = await night(together, lines);
    const error = await assertRejects(async () => {
      const session = await campaign.open([...SET, ...set]);
      await session.map(session.lines("test")[0]!);
    }, InputError);
    return error.message;
  };
  const unknown = await refused('{ line = "He I 5876" }', []);
  assertStringIncludes(unknown, "the line must be one of He I 5016: current value is");
  assertStringIncludes(unknown, "key lines[0].together[0].line");
  assertStringIncludes(
    await refused('{ line = "He I 5016" }', ["map.baseline=true"]),
    "baselines are free for one line alone",
  );
  assertStringIncludes(
    await refused('{ line = "He I 5016" }', ["lines[0].blends=[{air_angstrom=4900}]"]),
    "together must not stand beside blends",
  );
  assertStringIncludes(
    await refused('{ line = "He I 5016", ratio = "free" }', []),
    'must be a positive number or "measured"',
  );
});
