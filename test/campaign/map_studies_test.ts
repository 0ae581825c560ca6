// What [map] can ask for beside the map: each key, against the truth that the exposures were made of.
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertRejects,
  assertStringIncludes,
} from "@std/assert";
import { join } from "@std/path";
import type { MapDocument } from "../../engine/campaign/mod.ts";
import { InputError } from "../../engine/errors.ts";
import { readBytes } from "../../engine/files/mod.ts";
import { type FitsFile, parseFits } from "../../engine/fits/mod.ts";
import { EPHEMERIS, madeExposures } from "../spectra/made_exposures.ts";
import { type Campaign, codes, SECTIONS, SOURCE, writeCampaign } from "./campaign_fixture.ts";

/** As sharp as pixels of 50 km/s need, and no sharper: small maps are quick. */
const exposures = (making: Parameters<typeof madeExposures>[0] = {}) =>
  madeExposures({ resolution_angstrom: 2.4, ...making });

const ENTROPY = [
  "map.pixels=41",
  'map.method="entropy"',
  "map.resamples=2",
  "map.structures=false",
];

async function fitsOf({ folder }: Campaign): Promise<FitsFile> {
  const file = join(folder, "star", "map.fits");
  return parseFits(await readBytes(file), { file });
}

const textOf = (document: Pick<MapDocument, "warnings">, code: string) =>
  document.warnings.find((warning) => warning.code === code)?.text ?? "";

const night = await writeCampaign([{ raw: exposures() }]);
const base = await night.open();

Deno.test("map.sensitivity makes maps at χ² 5 % lower and higher, and follows the features in them", async () => {
  for (const method of ["entropy", "total-variation"]) {
    const document = await night.map([
      ...ENTROPY,
      `map.method="${method}"`,
      "map.reduced_chi_square=1.1",
      "map.sensitivity=true",
    ], base);
    const [map] = document.maps;
    const { closer, looser } = map!.sensitivity!;
    // The tolerance that the solvers keep.
    assertAlmostEquals(closer.reduced_chi_square / map!.reduced_chi_square, 0.95, 0.01, method);
    assertAlmostEquals(looser.reduced_chi_square / map!.reduced_chi_square, 1.05, 0.01, method);
    assertEquals([closer.reached, looser.reached], [true, true]);
    for (const { features } of [closer, looser]) {
      assertEquals(features.length, map!.features.length);
      assertAlmostEquals(features[0]!.vx_kms, SOURCE.vx_kms, 25);
      assertAlmostEquals(features[0]!.vy_kms, SOURCE.vy_kms, 25);
    }
    const { hdus } = await fitsOf(night);
    const [near, far] = ["H BETA CLOSER", "H BETA LOOSER"].map((name) =>
      hdus.find((hdu) => hdu.name === name)!.image()
    );
    assertEquals([near!.shape, far!.shape], [[41, 41], [41, 41]]);
    assertGreater(near!.data.reduce((d, f, k) => d + Math.abs(f - far!.data[k]!), 0), 0);
  }
});

Deno.test("map.structures tells what sampling and inversion do to a feature", async () => {
  const document = await night.map([...ENTROPY.slice(0, 3), "map.structures=true"], base);
  const [feature] = document.maps[0]!.features;
  // 24 exposures over one orbit make no structure of their own, and the source is well above the noise.
  assertLess(Math.abs(feature!.sampling_part!), 0.3);
  assertAlmostEquals(feature!.flux_kept!, 1, 0.3);
  // Never sharper than the pixels, never ten times as wide as the instrument.
  assert(feature!.resolution_major_kms! >= feature!.resolution_minor_kms!);
  assert(feature!.resolution_minor_kms! > 50 && feature!.resolution_major_kms! < 1480);
  const names = (await fitsOf(night)).hdus.map(({ name }) => name);
  assertEquals(names.slice(1), ["H BETA", "H BETA PREDICTED", "H BETA SPREAD", "H BETA SAMPLING"]);
});

Deno.test("map.modulation finds the amplitude that was put in, and none where there is none", async () => {
  const amplitude = 0.4;
  const modulated = exposures().map((e, k) => {
    const level = e.flux.toSorted()[Math.floor(0.3 * e.flux.length)]!;
    const swing = 1 + amplitude * Math.cos(2 * Math.PI * k * 300 / (86400 * EPHEMERIS.period_d));
    return { ...e, flux: e.flux.map((f) => level + swing * (f - level)) };
  });
  const set = [...ENTROPY, "map.modulation=true"];
  const regions =
    'regions = [{ name = "empty", vx_kms = -500, vy_kms = -500, radius_kms = 200 }]\n';
  const campaign = await writeCampaign([{ raw: modulated }], { map: SECTIONS.map + regions });
  const document = await campaign.map(set);
  const { regions: found } = document.maps[0]!.modulation!;
  assertEquals([found[0]!.name, found.at(-2)!.name, found.at(-1)!.name], [
    "feature 1",
    "empty",
    "whole map",
  ]);
  const whole = found.at(-1)!;
  assertLess(Math.abs(whole.fitted_amplitude - amplitude), 3 * whole.fitted_error + 0.02);
  assertLess(whole.p_value!, 1e-6);
  const names = (await fitsOf(campaign)).hdus.map(({ name }) => name);
  for (const name of ["AVERAGE", "COSINE", "SINE"]) assert(names.includes(`H BETA ${name}`), name);
  const steady = (await night.map(set, base)).maps[0]!.modulation!.regions.at(-1)!;
  assertLess(steady.fitted_amplitude, 3 * steady.fitted_error);
  assertGreater(steady.p_value!, 1e-3);
});

Deno.test("map.systemic_scan finds γ, and says when another one was taken", async () => {
  const document = await night.map([...ENTROPY, "map.systemic_scan=true", "orbit.systemic_kms=20"]);
  const scan = document.maps[0]!.systemic_scan!;
  assertEquals([scan.shape, scan.adopted, scan.parameter], ["minimum", 20, "systemic_kms"]);
  // The exposures were made with γ = 0; the error is that of the data, not of the map's smoothing.
  assertLess(Math.abs(scan.best!), 4 * scan.error! + 1);
  assertLess(scan.error!, 5);
  // Over the least of the parabola through the lowest three.
  assertAlmostEquals(Math.min(...scan.excess), 0, 0.3);
  assertStringIncludes(textOf(document, "systemic-scan-disagrees"), "km/s, not 20");
});

Deno.test("map.period_scan finds the period from two nights, and says that one night tells little", async () => {
  const nights = await writeCampaign([
    { name: "one", raw: exposures({ count: 10, cadence_s: 690 }) },
    { name: "two", raw: exposures({ count: 10, cadence_s: 690, start: "2024-01-02T02:30:00" }) },
  ], { exposures: '[[exposures]]\nfiles = ["one/*.fits", "two/*.fits"]\n' });
  const off = EPHEMERIS.period_d * (1 + 0.002);
  const small = ["map.half_width_kms=700", "map.pixels=31"];
  const set = [...ENTROPY, ...small, "map.period_scan=true", `orbit.period_d=${off}`];
  const document = await nights.map(set);
  const scan = document.maps[0]!.period_scan!;
  assertEquals([scan.shape, scan.adopted], ["minimum", off]);
  assertLess(Math.abs(scan.best! - EPHEMERIS.period_d), 4 * scan.error!);
  assertLess(scan.error!, 1e-4 * EPHEMERIS.period_d);
  assertStringIncludes(textOf(document, "period-scan-disagrees"), " d, not 0.08016");
  assert(!codes(document).includes("period-scan-short"));
  // A fifth of a cycle over the 13 orbits of both nights, and a cycle more or less between them.
  assertAlmostEquals((scan.searched[1] - scan.searched[0]) / off, 0.4 / 13.5, 0.002);
  assertEquals(scan.slips.map(({ cycles }) => cycles), [-1, 1]);
  for (const { cycles, gap_cycles, period_d, excess } of scan.slips) {
    assertAlmostEquals(period_d * (1 + cycles / gap_cycles), scan.best!, 0.003 * off);
    assertGreater(excess, 9);
  }
  const short = await night.map([...ENTROPY, "map.period_scan=true"], base);
  const [one] = short.maps;
  assertStringIncludes(textOf(short, "period-scan-short"), "the data span 1.0 orbits");
  // 1.04 orbits: a period is told by what is seen twice, a few hundredths of an orbit.
  assertGreater(one!.period_scan!.error ?? Infinity, 20 * scan.error!);
});

Deno.test("map.period_scan goes a whole cycle between nights away, and says where other counts fit as well", async () => {
  const seen = { count: 8, cadence_s: 860, signal_to_noise: 1.5 };
  const nights = await writeCampaign([
    { name: "one", raw: exposures(seen) },
    { name: "two", raw: exposures({ ...seen, start: "2024-01-02T02:30:00" }) },
  ], { exposures: '[[exposures]]\nfiles = ["one/*.fits", "two/*.fits"]\n' });
  // 12.75 cycles of the true period between the nights are 13.75 of this one.
  const slipped = EPHEMERIS.period_d * 12.75 / 13.75;
  const set = [...ENTROPY, "map.resamples=0", "map.half_width_kms=700", "map.pixels=31"];
  const session = await nights.open([...set, `orbit.period_d=${slipped}`]);
  const scan = await session.studies.periodScan(session.lines("test")[0]!);
  assertLess(Math.abs(scan.best! - EPHEMERIS.period_d), 4 * scan.error!);
  // So little signal does not choose between the counts of cycles, and the one that it began with is among them.
  assertEquals(scan.shape, "several");
  assert(
    scan.slips.some(({ period_d, excess }) =>
      Math.abs(period_d / slipped - 1) < 0.005 && excess > 0 && excess < 9
    ),
  );
  assertStringIncludes(textOf(scan, "period-scan-several"), "one cycle");
});

Deno.test("map.coordinates = inside-out solves with speeds turned, and finds the source where it is", async () => {
  const [map] = (await night.map([...ENTROPY, 'map.coordinates="inside-out"'], base)).maps;
  assertAlmostEquals(map!.features[0]!.vx_kms, SOURCE.vx_kms, 25);
  assertAlmostEquals(map!.features[0]!.vy_kms, SOURCE.vy_kms, 25);
  assertAlmostEquals(map!.reduced_chi_square, 1, 0.01);
});

Deno.test("studies refuse what they cannot be made of", async () => {
  const mixed = await writeCampaign([{ raw: exposures({ count: 16, cadence_s: 430 }) }], {
    lines: SECTIONS.lines!.replace("reach_kms", 'sign = "mixed"\nreach_kms'),
  });
  const { message } = await assertRejects(
    () => mixed.map([...ENTROPY, "map.modulation=true"]),
    InputError,
  );
  assertStringIncludes(message, "the line must be one alone, and of one sign");
  assertStringIncludes(message, "key map.modulation");
  const searched = await night.map([
    ...ENTROPY,
    "map.modulation=true",
    'orbit.systemic_kms="search"',
  ]);
  assert(codes(searched).includes("modulation-with-searched-systemic"));
});
