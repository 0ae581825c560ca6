// One campaign for each trap that observers' data hold: the right answer, or the right warning.
import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import { airToVacuum, isoDate, lineNamed, midExposureBjd } from "../../engine/sky/mod.ts";
import {
  encodeExposures,
  type RawExposure,
  readExposures,
  type Spectrum,
} from "../../engine/spectra/mod.ts";
import {
  correctZero,
  makeTrail,
  measureSkyLines,
  reportZeros,
  type Trail,
  type TrailOptions,
  windowContents,
} from "../../engine/trail/mod.ts";
import { EPHEMERIS, madeExposures, SITE, TARGET, written } from "./made_exposures.ts";
import { assertRightPlace, findSource, hjdOf } from "./one_source.ts";

const H_BETA = lineNamed("H beta");
const C = 299792.458;

function trailOf(spectra: readonly Spectrum[], options: Partial<TrailOptions> = {}): Trail {
  return makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    reach_kms: 2000,
    continuum_kms: [[-5000, -2500], [2500, 5000]],
    ...options,
  });
}

async function image(raw: readonly RawExposure[], options = {}) {
  const paths = await written(encodeExposures(raw));
  return await readExposures(paths, options);
}

Deno.test("trap: two arms of one spectrograph, a line in each, and one covered by both", async () => {
  const blue = await image(madeExposures({ low_angstrom: 4500, high_angstrom: 4800 }));
  const red = await image(madeExposures({ low_angstrom: 4760, high_angstrom: 5010, seed: 2 }), {
    group: 1,
  });
  const spectra = [...blue.spectra, ...red.spectra];
  const trail = trailOf(spectra);
  assertEquals([trail.sampling.count, [...new Set(trail.group)]], [24, [1]]);
  assertRightPlace(trail);
  assertEquals(trail.warnings, []);
  const helium = makeTrail(spectra, {
    line: lineNamed("He II 4686"),
    ephemeris: EPHEMERIS,
    reach_kms: 1500,
  });
  assertEquals([...new Set(helium.group)], [0]);
});

Deno.test("trap: nights of different resolution keep their own profiles and pixels", async () => {
  const first = await image(madeExposures({ count: 16 }));
  const second = await image(
    madeExposures({
      count: 16,
      start: "2024-01-03T02:30:00",
      step_angstrom: 1,
      resolution_angstrom: 3,
      seed: 2,
    }),
    { group: 1 },
  );
  const trail = trailOf([...first.spectra, ...second.spectra]);
  const ratio = trail.sampling.profile_sigma_kms[31]! / trail.sampling.profile_sigma_kms[0]!;
  assertAlmostEquals(ratio, 2.5, 1e-3);
  assertRightPlace(trail);
  assertEquals(trail.noise.groups.map((g) => g.group), [0, 1]);
});

Deno.test("trap: barycentric wavelengths with UTC times at the observatory", async () => {
  const raw = madeExposures();
  // The pipeline moved the wavelengths, exposure by exposure, and left the times alone.
  const moved = raw.map((e) => {
    const { observer_factor } = midExposureBjd({ date: e.start, exposure_s: e.exposure_s }, {
      target: TARGET,
      site: SITE,
    });
    return { ...e, wavelength_angstrom: e.wavelength_angstrom.map((w) => w * observer_factor) };
  });
  const right = await image(moved, { wavelength_frame: "barycentric" });
  assertRightPlace(trailOf(right.spectra));
  const decided = (what: string) => right.decisions.find((d) => d.what === what)!.value;
  assertEquals([decided("wavelength frame"), decided("time place")], [
    "barycentric",
    "observatory",
  ]);
  // Corrected twice, the systemic velocity is off by the Earth's motion: the trap is real.
  const twice = findSource(trailOf((await image(moved)).spectra));
  assertGreater(Math.abs(twice.gamma), 5 * twice.error.gamma);
});

async function textWithLog(
  raw: readonly RawExposure[],
  log: { header: string; row: (e: RawExposure, k: number) => string },
) {
  const files = encodeExposures(raw, { layout: "text" });
  const paths = await written(files.slice(0, -1));
  const folder = paths[0]!.replace(/\/[^/]*$/, "");
  const rows = raw.map((e, k) => `${files[k]!.name},${log.row(e, k)}`);
  await Deno.writeTextFile(`${folder}/log.csv`, `file,${log.header}\n${rows.join("\n")}\n`);
  return { paths, log: `${folder}/log.csv` };
}

Deno.test("trap: a log of HJD in UTC, or in TT", async () => {
  const raw = madeExposures();
  const where = { site: SITE, target: TARGET, resolution_angstrom: 1.2 };
  for (const scale of ["utc", "tt"] as const) {
    const { paths, log } = await textWithLog(raw, {
      header: "HJD,exposure_s",
      row: (e) => `${hjdOf(e, scale)},${e.exposure_s}`,
    });
    const told = await readExposures(paths, { log, ...where, time_scale: scale });
    assertRightPlace(trailOf(told.spectra));
    told.spectra.forEach((s, k) => {
      const { bjd } = midExposureBjd({ date: raw[k]!.start, exposure_s: raw[k]!.exposure_s }, {
        target: TARGET,
        site: SITE,
      });
      assert(Math.abs(s.mid[0] - bjd[0] + s.mid[1] - bjd[1]) * 86400 < 1e-3);
    });
    const untold = await readExposures(paths, { log, ...where });
    assertEquals(untold.warnings.map((w) => w.code), ["time-scale-assumed", "time-mark-assumed"]);
    const off = (untold.spectra[0]!.mid[1] - told.spectra[0]!.mid[1]) * 86400;
    // TT runs 69.184 s ahead of UTC: taken for UTC, an HJD(TT) comes out that much late.
    assertAlmostEquals(off, scale === "utc" ? 0 : 69.184, 0.01);
  }
});

Deno.test("trap: a log whose column names say place and scale needs no more", async () => {
  const raw = madeExposures();
  const { paths, log } = await textWithLog(raw, {
    header: "mid_bjd_tdb,exposure_s",
    row: (e) => {
      const { bjd } = midExposureBjd({ date: e.start, exposure_s: e.exposure_s }, {
        target: TARGET,
        site: SITE,
      });
      return `${bjd[0]}${bjd[1].toFixed(9).slice(1)},${e.exposure_s}`;
    },
  });
  const { spectra, warnings } = await readExposures(paths, { log, site: SITE, target: TARGET });
  assertRightPlace(trailOf(spectra, { resolution_kms: 74 }));
  assertEquals(warnings, []);
});

Deno.test("trap: missing errors are estimated, with photon growth, and said", async () => {
  const { spectra, decisions } = await image(madeExposures({ errors: false, signal_to_noise: 30 }));
  const trail = trailOf(spectra);
  const found = assertRightPlace(trail);
  assertEquals(trail.warnings.map((w) => w.code), ["errors-estimated"]);
  assertEquals(decisions.find((d) => d.what === "errors")!.assumed, true);
  // 3 100 samples: reduced chi-square scatters by 0.025; the scale squared is known to 4 %.
  assertAlmostEquals(found.reduced, 1, 0.12);
});

Deno.test("trap: noise that resampling correlated is told, and errors of a fit grow by what is told", async () => {
  const places: number[] = [];
  const claimed: number[] = [];
  let growth = 0;
  for (let seed = 1; seed <= 12; seed++) {
    // Linear interpolation by half a pixel, with errors propagated as pipelines do: from one pixel.
    const raw = madeExposures({ seed, signal_to_noise: 20, count: 12 }).map((e) => ({
      ...e,
      wavelength_angstrom: e.wavelength_angstrom.map((w) => w + 0.25),
      flux: e.flux.map((f, i) => 0.5 * (f + (e.flux[i + 1] ?? f))),
    }));
    const trail = trailOf((await image(raw)).spectra);
    assert(trail.warnings.some((w) => w.code === "noise-correlated"), `seed ${seed}`);
    assert(trail.warnings.some((w) => w.code === "errors-implausible") || trail.noise_scale < 0.8);
    // Variance 1/2 and correlation 1/2 at lag one.
    assertAlmostEquals(trail.noise_scale, Math.SQRT1_2, 0.06);
    assertAlmostEquals(trail.noise.correlation_length_pixels, 2, 0.25);
    const found = findSource(trail);
    places.push(found.vy);
    claimed.push(found.error.vy);
    growth = Math.sqrt(trail.noise.correlation_length_pixels);
  }
  const mean = places.reduce((a, b) => a + b, 0) / 12;
  const spread = Math.sqrt(places.reduce((s, p) => s + (p - 400) ** 2, 0) / 12);
  const told = growth * claimed.reduce((a, b) => a + b, 0) / 12;
  assertAlmostEquals(mean, 400, 4 * told / Math.sqrt(12));
  // A spread from 12 places is known to 20 %: a factor of two either way is 5σ.
  assert(spread / told > 0.5 && spread / told < 1.6, `${spread} against ${told}`);
});

// Flexure moves the whole spectrum, sky line and all; the sky line is left in for calibration.
function withSky(raw: readonly RawExposure[], flexure: (k: number) => number): RawExposure[] {
  const line = airToVacuum(4985);
  return raw.map((e, k) => {
    const wavelength_angstrom = e.wavelength_angstrom.map((w) => w * (1 + flexure(k) / C));
    const flux = e.flux.map((f, i) =>
      f + 4000 * Math.exp(-0.5 * ((airToVacuum(e.wavelength_angstrom[i]!) - line) / 0.51) ** 2)
    );
    return { ...e, wavelength_angstrom, flux };
  });
}

Deno.test("trap: flexure of 15 km/s that drifts with phase is reported, and corrected when asked", async () => {
  // One orbit and a bit: a drift over the night looks like orbital motion.
  const raw = withSky(
    madeExposures({ count: 24, signal_to_noise: 80 }),
    (k) => 15 * Math.sin(2 * Math.PI * k / 23),
  );
  const { spectra } = await image(raw);
  const plain = trailOf(spectra);
  const off = findSource(plain);
  assertGreater(Math.hypot(off.vx - 300, off.vy - 400), 8);
  const shifts = measureSkyLines(spectra, { lines_angstrom: [airToVacuum(4985)] });
  const report = reportZeros(shifts, plain.sampling.phase)!;
  assertGreater(report.orbital_kms, 10);
  assertLess(report.orbital_error_kms, 1);
  assertRightPlace(trailOf(correctZero(spectra, shifts)));
});

Deno.test("trap: a sky line across the wing is shown by its ring, and masked in the observer's frame", async () => {
  const air = 4845;
  // Two nights half a year apart: the Earth's motion moves the line in the star's frame by 50 km/s.
  const nights = [
    madeExposures({ count: 12 }),
    madeExposures({ count: 12, start: "2024-09-20T08:00:00", seed: 2 }),
  ].map((raw) =>
    raw.map((e) => ({
      ...e,
      flux: e.flux.map((f, i) =>
        f + 1500 * Math.exp(-0.5 * ((e.wavelength_angstrom[i]! - air) / 0.51) ** 2)
      ),
    }))
  );
  const read = await Promise.all(nights.map((raw, group) => image(raw, { group })));
  const spectra = read.flatMap((r) => r.spectra);
  const mask = {
    name: "sky line",
    low_angstrom: airToVacuum(air - 2.5),
    high_angstrom: airToVacuum(air + 2.5),
  };
  const [ring] = windowContents(H_BETA, {
    reach_kms: 2000,
    continuum_kms: [],
    half_width_kms: 0,
    observed: [mask],
    observer_factor: spectra[0]!.observer_factor!,
  }).filter((c) => c.kind === "static");
  assertAlmostEquals(ring!.ring_radius_kms!, 1007, 35);
  const bad = findSource(trailOf(spectra, { cosmic_rays: false }));
  assertGreater(bad.reduced, 2);
  const masked = trailOf(spectra, { masks: [mask] });
  assertRightPlace(masked);
  assertLess(findSource(masked).reduced, 1.15);
  // The mask stands elsewhere in the star's frame on the second night.
  const hidden = (i: number) => {
    const { start, velocity_kms } = masked.sampling;
    const at = [...masked.error.keys()].filter((k) =>
      k >= start[i]! && k < start[i + 1]! && masked.error[k] === Infinity
    );
    return velocity_kms[at[at.length >> 1]!]!;
  };
  assertGreater(Math.abs(hidden(0) - hidden(23)), 30);
});

Deno.test("trap: blank, duplicate and out-of-order exposures", async () => {
  const raw = madeExposures();
  const blank = { ...raw[3]!, flux: raw[3]!.flux.map(() => 0) };
  const mixed = [
    raw[20]!,
    ...raw.slice(0, 3),
    blank,
    ...raw.slice(4, 20),
    raw[10]!,
    ...raw.slice(21),
  ];
  const { spectra } = await image(mixed);
  const trail = trailOf(spectra);
  assertEquals(trail.warnings.map((w) => w.code), [
    "blank-exposures",
    "exposures-reordered",
    "duplicate-exposures",
  ]);
  assertEquals(trail.sampling.count, 23);
  const orbits = [...trail.sampling.phase].map((p, i) => p + trail.sampling.cycle[i]!);
  assertEquals(orbits, orbits.toSorted((a, b) => a - b));
  assertRightPlace(trail);
});

Deno.test("trap: NaNs, infinite and zero errors stay masks", async () => {
  const random = randomStream(5);
  const raw = madeExposures().map((e) => ({
    ...e,
    flux: e.flux.map((f) => random.uniform() < 0.03 ? NaN : f),
    error: e.error!.map((s) => random.uniform() < 0.03 ? Infinity : s),
  }));
  const trail = trailOf((await image(raw)).spectra);
  const hidden = [...trail.error].filter((e) => e === Infinity).length / trail.error.length;
  assertAlmostEquals(hidden, 0.06, 0.02);
  assert(trail.flux.every((f) => Number.isFinite(f)));
  assertRightPlace(trail);
});

Deno.test("trap: start times taken for mid-exposure turn the map, and stated marks put it right", async () => {
  const raw = madeExposures({ exposure_s: 290, signal_to_noise: 80 });
  const right = trailOf((await image(raw)).spectra);
  assertRightPlace(right);
  const wrong = findSource(trailOf((await image(raw, { time_marks: "mid" })).spectra));
  // 145 s of 6912 s: 7.6 degrees, 66 km/s at 500 km/s.
  assertAlmostEquals(Math.hypot(wrong.vx - 300, wrong.vy - 400), 2 * Math.PI * 500 * 145 / 6912, 8);
  assertEquals(isoDate(raw[0]!.start), "2024-01-01T02:00:00.000");
});
