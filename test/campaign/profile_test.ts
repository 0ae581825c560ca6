import { assert, assertAlmostEquals, assertEquals, assertStringIncludes } from "@std/assert";
import { join } from "@std/path";
import { openSession, readTarget, runProfile } from "../../engine/campaign/mod.ts";
import { profileLines } from "../../cli/commands/profile.ts";
import { parseEcsv } from "../../engine/files/mod.ts";
import { median } from "../../engine/numerics/mod.ts";
import { lineNamed } from "../../engine/sky/mod.ts";
import type { RawExposure } from "../../engine/spectra/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { writeCampaign } from "./campaign_fixture.ts";

// H beta of one source, and He II 4686 half as strong on a long blue spectrum.
function blue(): RawExposure[] {
  const raw = madeExposures({
    count: 16,
    cadence_s: 430,
    signal_to_noise: 60,
    medium: "vacuum",
    low_angstrom: 4480,
    high_angstrom: 5010,
  });
  const shift = lineNamed("H beta").vacuum_angstrom / lineNamed("He II 4686").vacuum_angstrom;
  return raw.map((e) => {
    const level = median([...e.flux]);
    const flux = e.flux.map((f, i) => {
      const from = Math.round((e.wavelength_angstrom[i]! * shift - 4480) / 0.5);
      return from < e.flux.length ? f + 0.5 * (e.flux[from]! - level) : f;
    });
    return { ...e, flux };
  });
}

async function profiled(raw: readonly RawExposure[], set: readonly string[] = []) {
  const campaign = await writeCampaign([{ raw }]);
  const session = openSession(
    await readTarget(join(campaign.folder, "star.toml"), {
      set: ['plate.formats=["svg"]', ...set],
    }),
  );
  const folder = join(campaign.folder, "star");
  return { ...await runProfile(session, { folder }), folder, campaign };
}

Deno.test("runProfile() measures lines against phase, in JSON, ECSV and a plate", async () => {
  const { document, folder } = await profiled(madeExposures({ signal_to_noise: 60 }));
  const [line] = document.lines;
  // A Gaussian 1.5 high and 150 km/s wide (σ): 1.5 √(2π) 150 km/s at 4862.7 Å.
  const width = 1.5 * Math.sqrt(2 * Math.PI) * 150 * 4862.7 / 299792.458;
  const { mean, bins } = line!;
  assertAlmostEquals(
    mean.equivalent_width_angstrom.value,
    width,
    4 * mean.equivalent_width_angstrom.error,
  );
  // The mean of all smears the source over ±500 km/s; each bin shows its own width.
  const narrow = bins.map(({ profile }) => profile.fwhm_kms.value);
  for (const value of narrow) assertAlmostEquals(value, 2.3548 * Math.hypot(150, 74 / 2.3548), 60);
  // The centroid of bin φ is −300 cos + 400 sin.
  for (const { phase, profile } of bins) {
    const orbit = 2 * Math.PI * phase;
    const truth = -300 * Math.cos(orbit) + 400 * Math.sin(orbit);
    assertAlmostEquals(profile.centroid_kms.value, truth, 100);
  }
  const table = parseEcsv(await Deno.readTextFile(join(folder, "profile.ecsv")));
  const column = (name: string) => table.columns.find((c) => c.name === name)!;
  assertEquals(column("source").values.length, 24);
  assertEquals(column("equivalent_width").unit, "Angstrom");
  const widths = column("equivalent_width").values as number[];
  const errors = column("equivalent_width_error").values as number[];
  const chi = widths.reduce((sum, w, i) => sum + ((w - width) / errors[i]!) ** 2, 0) / 24;
  // Reduced χ² of 24 values scatters by 0.29.
  assertAlmostEquals(chi, 1, 0.9);
  const svg = await Deno.readTextFile(join(folder, "profile-plate.svg"));
  const caption = await Deno.readTextFile(join(folder, "profile-plate.txt"));
  assertStringIncludes(svg, "equivalent width");
  assertStringIncludes(caption, "(b) Hβ: Equivalent width against phase");
  assertStringIncludes(caption, "(a) Mean spectrum.");
  const json = JSON.parse(await Deno.readTextFile(join(folder, "profile.json")));
  assertEquals([json.schema, json.groups[0].exposures], ["profile/1", 24]);
});

Deno.test("runProfile() names the lines that are seen and takes no neighbour's wing for absorption", async () => {
  const { document } = await profiled(blue());
  const seen = document.groups[0]!.identified.filter((found) => found.seen);
  assertEquals(seen.map(({ line }) => line.name), ["He II 4686", "H beta"]);
  for (const { equivalent_width_angstrom } of seen) assert(equivalent_width_angstrom > 0);
  // The Bowen blend and its parts are listed as covered, not as seen.
  const bowen = document.groups[0]!.identified.find(({ line }) => line.name === "Bowen blend");
  assertEquals(bowen?.seen, false);
  const text = profileLines(document).join("\n");
  assertStringIncludes(text, "lines seen in the mean of 16 exposures");
  assert(/He II 4686 +4685\.\d\d +\d+\.\d+ ± \d\.\d+ +emission/.test(text), text);
  assertEquals(/NaN|undefined|null|Bowen/.test(text), false, text);
});

Deno.test("runProfile() leaves V/R out for a line of the donor, and tells absorption by its sign", async () => {
  const dark = madeExposures({ count: 16, cadence_s: 430 }).map((e) => {
    const level = median([...e.flux]);
    return { ...e, flux: e.flux.map((f) => level - 0.5 * (f - level)) };
  });
  const { document, folder } = await profiled(dark, ['lines[0].traces="donor"']);
  assertEquals(document.lines[0]!.turned, true);
  assert(document.lines[0]!.mean.equivalent_width_angstrom.value < 0);
  const caption = await Deno.readTextFile(join(folder, "profile-plate.txt"));
  assertEquals(caption.includes("violet"), false);
});

Deno.test("runProfile() gives the same bytes again, and other errors with another seed", async () => {
  const raw = madeExposures({ count: 12, cadence_s: 570 });
  const [one, two] = [await profiled(raw), await profiled(raw)];
  const read = ({ folder }: { folder: string }) => Deno.readTextFile(join(folder, "profile.ecsv"));
  assertEquals(await read(one), await read(two));
  const other = await profiled(raw, ["seed=2"]);
  const error = ({ document }: typeof one) =>
    document.lines[0]!.mean.equivalent_width_angstrom.error;
  assert(error(one) !== error(other));
  assertAlmostEquals(error(one) / error(other), 1, 0.5);
});
