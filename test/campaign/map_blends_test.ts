// Lines blended with the mapped one: on its map with a given or a fitted ratio, or on maps of their own.
import { assertAlmostEquals, assertEquals, assertLess, assertRejects } from "@std/assert";
import { join } from "@std/path";
import { InputError } from "../../engine/errors.ts";
import { readBytes } from "../../engine/files/mod.ts";
import { findHdu, parseFits } from "../../engine/fits/mod.ts";
import { lineNamed, vacuumToAir } from "../../engine/sky/mod.ts";
import type { RawExposure } from "../../engine/spectra/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { SECTIONS, SOURCE, writeCampaign } from "./campaign_fixture.ts";

const REST = lineNamed("H beta").vacuum_angstrom;
/** The blend stands 900 km/s to the red of H beta, with 0.4 of its flux. */
const FACTOR = 1 + 900 / 299792.458, RATIO = 0.4;
const AIR = vacuumToAir(REST * FACTOR).toFixed(3);

/** The exposures with every line a second time, at wavelengths longer by a factor. */
function blended(raw: readonly RawExposure[]): RawExposure[] {
  return raw.map((e) => {
    const { wavelength_angstrom: w, flux } = e;
    const level = flux.toSorted()[Math.floor(0.3 * flux.length)]!;
    const step = w[1]! - w[0]!;
    return {
      ...e,
      flux: flux.map((f, i) => {
        const at = Math.max(0, (w[i]! / FACTOR - w[0]!) / step), k = Math.floor(at);
        const there = (1 - at + k) * flux[k]! + (at - k) * flux[k + 1]!;
        return f + RATIO * (there - level);
      }),
    };
  });
}

const night = (blends: string) =>
  writeCampaign([{
    raw: blended(madeExposures({ resolution_angstrom: 2.4, signal_to_noise: 80 })),
  }], {
    lines: SECTIONS.lines!.replace("reach_kms", `blends = [${blends}]\nreach_kms`),
    map: SECTIONS.map!.replace("back-projection", "entropy").replace("61", "41"),
  });

function assertInPlace({ peak }: { peak: { vx_kms: number; vy_kms: number } | null }): void {
  // Half a pixel.
  assertAlmostEquals(peak!.vx_kms, SOURCE.vx_kms, 25);
  assertAlmostEquals(peak!.vy_kms, SOURCE.vy_kms, 25);
}

Deno.test("a blend shares the map with a fitted ratio, whose error holds the truth", async () => {
  const campaign = await night(`{ air_angstrom = ${AIR}, ratio = "free" }`);
  const { maps: [map] } = await campaign.map();
  const [blend] = map!.blends;
  assertEquals([blend!.map, blend!.peak], ["shared", null]);
  // Three standard deviations, and 1 % for the instrument's profile of the copied line.
  assertLess(Math.abs(blend!.ratio - RATIO), 3 * blend!.ratio_error! + 0.004);
  assertLess(blend!.ratio_error!, 0.05);
  assertInPlace(map!);
  assertAlmostEquals(map!.reduced_chi_square, 1, 2e-3);
  // The tests before an inversion know of one line alone.
  assertEquals([map!.any_map.moments_p, map!.any_map.core_p], [null, null]);
});

Deno.test("a fitted ratio serves total variation, and a stated one is taken as it stands", async () => {
  for (const ratio of ['"free"', "0.4"]) {
    const campaign = await night(`{ air_angstrom = ${AIR}, ratio = ${ratio} }`);
    const session = await campaign.open(['map.method="total-variation"', "map.resamples=0"]);
    const map = await session.map(session.lines("test")[0]!);
    assertAlmostEquals(map.blends[0]!.ratio!, RATIO, 0.02);
    assertEquals(map.blends[0]!.ratio_error === null, ratio === "0.4");
    assertInPlace({ peak: map.features[0]! });
    // The model that is shown has the blend in it.
    const kept = map.residual.filter((value) => Number.isFinite(value));
    assertLess(Math.hypot(...kept) / Math.sqrt(kept.length), 1.15);
  }
});

Deno.test("a blend with a map of its own gets it, in map.fits too", async () => {
  const campaign = await night(`{ name = "He I 4922", air_angstrom = ${AIR}, map = "own" }`);
  const document = await campaign.map();
  const [map] = document.maps;
  const [blend] = map!.blends;
  assertInPlace(map!);
  assertInPlace(blend!);
  // Two maps share what is between them by entropy alone: the ratio is not sharp.
  assertAlmostEquals(blend!.ratio, RATIO, 0.05);
  assertEquals([blend!.name, blend!.map, blend!.ratio_error], ["He I 4922", "own", null]);
  const file = join(campaign.folder, "star", "map.fits");
  const hdu = findHdu(parseFits(await readBytes(file), { file }), "H BETA WITH HE I 4922");
  assertEquals(hdu.shape, [41, 41]);
  assertAlmostEquals(Number(hdu.header.card("RESTAIR")?.value), Number(AIR) * 1e-10, 1e-14);
});

Deno.test("the errors of a line hold what a blend with a map of its own takes from it", async () => {
  const campaign = await night(`{ name = "He I 4922", air_angstrom = ${AIR}, map = "own" }`);
  const session = await campaign.open(["map.resamples=4"]);
  const map = await session.map(session.lines("test")[0]!);
  assertEquals(map.warnings.filter(({ code }) => code.startsWith("own")), []);
  assertAlmostEquals(map.features[0]!.vx_kms, SOURCE.vx_kms, 25);
  const refused = async (...set: string[]) => {
    const session = await campaign.open(["map.resamples=0", ...set]);
    const { message } = await assertRejects(() => session.map(session.lines("t")[0]!), InputError);
    return message.replace(campaign.folder, "");
  };
  const rule = "a blend has a map of its own beside a line of one sign, in the usual coordinates";
  assertEquals(
    await refused('map.coordinates="inside-out"'),
    `Cannot map H beta with its blends as ${rule}: current value is "inside-out" (/star.toml, key map.coordinates); use map = "shared"`,
  );
  assertEquals(
    await refused('lines[0].sign="mixed"'),
    `Cannot map H beta with its blends as ${rule}: current value is "mixed" (/star.toml, key lines.sign); use map = "shared"`,
  );
});

Deno.test("blends are refused where the inversion cannot tell them apart, with their place", async () => {
  const campaign = await night(
    `{ air_angstrom = ${AIR}, ratio = 0.4 }, { name = "He I 4922", map = "own" }`,
  );
  const refused = async (...set: string[]) => {
    const session = await campaign.open(set);
    const [line] = session.lines("test");
    const { message } = await assertRejects(() => session.map(line!), InputError);
    return message.replace(campaign.folder, "");
  };
  assertEquals(
    await refused(),
    `Cannot map H beta with its blends as its blends must all share its map, or all have maps of their own: current value is "${AIR}: shared, He I 4922: own" (/star.toml, key lines.blends.map)`
      .replace(AIR, vacuumToAir(REST * FACTOR).toFixed(2)),
  );
  assertEquals(
    await refused('map.method="back-projection"'),
    'Cannot map H beta with its blends as blends can be told apart by a fit alone: current value is "back-projection" (/star.toml:20, key lines[0].blends); use map.method = "entropy"',
  );
  assertEquals(
    await refused('map.method="total-variation"'),
    'Cannot map H beta with its blends as a blend has a map of its own by entropy alone: current value is "total-variation" (/star.toml:20, key lines[0].blends[1].map); use map.method = "entropy", or map = "shared"',
  );
  // A blend is no mirror of itself about γ, as modulation is not: neither inversion of it is tried.
  const quick = ["map.resamples=0", "map.modulation=true"];
  for (const blend of ["ratio = 0.4", 'map = "own"']) {
    const one = await night(`{ name = "He I 4922", air_angstrom = ${AIR}, ${blend} }`);
    const { message } = await assertRejects(() => one.map(quick), InputError);
    assertEquals(
      message.replace(one.folder, ""),
      'Cannot map the modulation of H beta as the line must be one alone, and of one sign: a blend is as little a mirror of itself about the systemic velocity as modulation: current value is "1 blend" (/star.toml, key map.modulation); leave the blends out, or map.modulation',
    );
  }
});
