import { assert, assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import {
  equivalentWidthError,
  makeTrail,
  measureProfile,
  measureTrail,
  widthInAngstrom,
} from "../../engine/trail/mod.ts";
import { EPHEMERIS, H_BETA, madeSpectra, type Making } from "./made_spectra.ts";

const trailOf = (making: Making) =>
  makeTrail(madeSpectra(making), {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: [[-8000, -3000], [5800, 7800]],
  });

const V = Float64Array.from({ length: 401 }, (_, i) => 10 * (i - 200));
const gauss = (c: number, w: number) => (v: number) => Math.exp(-0.5 * ((v - c) / w) ** 2);

Deno.test("measureProfile() measures a Gaussian: width, half width, centroid", () => {
  const flux = V.map((v) => 1.5 * gauss(40, 200)(v));
  const m = measureProfile({ velocity_kms: V, flux }, { smooth_kms: 0 });
  assertAlmostEquals(m.equivalent_width_kms, 1.5 * 200 * Math.sqrt(2 * Math.PI), 1e-6);
  assertAlmostEquals(m.centroid_kms, 40, 1e-6);
  // Linear between bins of 10 km/s: the curvature leaves 0.03 km/s.
  assertAlmostEquals(m.fwhm_kms, 200 * 2.354820, 0.1);
  assertAlmostEquals(m.full_width_kms, 2 * 200 * Math.sqrt(2 * Math.log(10)), 0.1);
  assert(Number.isNaN(m.peak_separation_kms));
  assertAlmostEquals(m.blue_peak_kms, 40, 0.01);
});

Deno.test("measureProfile() separates two peaks when the dip is deep enough, and not before", () => {
  const two = (half: number) =>
    measureProfile({
      velocity_kms: V,
      flux: V.map((v) => gauss(-half, 200)(v) + 0.8 * gauss(half, 200)(v)),
    }, { smooth_kms: 0 });
  assertAlmostEquals(two(600).peak_separation_kms, 1200, 2);
  assertAlmostEquals(two(600).blue_over_red, 1.25, 0.02);
  assert(Number.isNaN(two(150).peak_separation_kms));
});

Deno.test("measureProfile() takes V/R without a jump while an S-wave crosses the middle of a disc", () => {
  const steps = 200;
  const found = Array.from({ length: steps }, (_, k) => {
    const orbit = 2 * Math.PI * k / steps;
    const centre = -60 * Math.sin(orbit);
    const spot = 600 * Math.sin(orbit + 0.6);
    const flux = V.map((v) =>
      gauss(centre - 600, 350)(v) + gauss(centre + 600, 350)(v) + 0.5 * gauss(spot, 80)(v)
    );
    return { ...measureProfile({ velocity_kms: V, flux }, { smooth_kms: 100 }), centre };
  });
  // The S-wave is as high as the disc's peaks when it is between them: three maxima, two of which may
  // lie on one side. V/R goes round once an orbit; a choice among them would jump.
  const ratios = found.map((m) => m.blue_over_red);
  const steps_taken = ratios.map((ratio, k) =>
    Math.abs(Math.log(ratio / ratios[(k + 1) % steps]!))
  );
  assert(Math.min(...ratios) < 0.75 && Math.max(...ratios) > 1.3, `${Math.min(...ratios)}`);
  // A sine of this amplitude changes by 0.01 a step; peaks that merge make it twice as steep.
  assertLess(Math.max(...steps_taken), 0.04);
  // The middle of the half width is the disc's centre to a tenth of its half width.
  for (const { blue_peak_kms, red_peak_kms, centre } of found) {
    assert(blue_peak_kms < centre + 90 && red_peak_kms > centre - 90, `${blue_peak_kms}`);
  }
});

Deno.test("measureProfile() gives no width over a gap and none to an empty profile", () => {
  const flux = V.map((v, i) => i > 100 && i < 180 ? NaN : gauss(0, 200)(v));
  assert(
    Number.isNaN(measureProfile({ velocity_kms: V, flux }, { smooth_kms: 0 }).equivalent_width_kms),
  );
  const empty = measureProfile({ velocity_kms: V, flux: V.map(() => NaN) }, { smooth_kms: 50 });
  assert(Number.isNaN(empty.equivalent_width_kms));
  assert(Number.isNaN(empty.fwhm_kms));
});

Deno.test("measureTrail() measures equivalent width, peaks and continuum with errors that hold the truth", () => {
  const trail = trailOf({ signal_to_noise: 30, spot: 0, count: 40 });
  const measured = measureTrail(trail, { random: randomStream(3) });
  // Two Gaussians of height 1.5 and 220 km/s, over a continuum that falls by 2 % per 1000 km/s.
  const truth = widthInAngstrom(2 * 1.5 * 220 * Math.sqrt(2 * Math.PI), H_BETA.vacuum_angstrom);
  const pulls = measured.exposures.map((row) =>
    (row.equivalent_width_angstrom.value - truth) / row.equivalent_width_angstrom.error
  );
  const rms = Math.sqrt(pulls.reduce((s, p) => s + p * p, 0) / pulls.length);
  // 40 pulls: their root mean square is known to 11 %; errors from 100 copies to 7 % each.
  assertAlmostEquals(rms, 1, 0.35);
  assertAlmostEquals(measured.mean.profile.peak_separation_kms.value, 1100, 30);
  assertAlmostEquals(measured.mean.profile.blue_over_red.value, 1, 0.05);
  assertEquals(measured.bins.length, 20);
  const level = measured.exposures.map((row, k) =>
    row.continuum.value / (1000 * (1 + 0.3 * Math.sin(7 * k)))
  );
  for (const ratio of level) assertAlmostEquals(ratio, 1, 0.02);
});

Deno.test("measureTrail() follows the S-wave and the flux of a line whose continuum is divided out", () => {
  const measured = measureTrail(trailOf({ signal_to_noise: 60, spot: 0, count: 20 }), {
    random: randomStream(1),
    resamples: 30,
  });
  measured.exposures.forEach((row) => {
    assertAlmostEquals(
      row.line_flux.value,
      row.equivalent_width_angstrom.value * row.continuum.value,
      1e-9 * row.line_flux.value,
    );
    assertLess(row.line_flux.error / row.line_flux.value, 0.05);
  });
});

Deno.test("measureTrail() turns a line in absorption round and keeps its sign", () => {
  const measured = measureTrail(trailOf({ line: 0, spot: 0, absorption: 0.5, count: 20 }), {
    random: randomStream(1),
    resamples: 20,
  });
  assertEquals(measured.turned, true);
  assertAlmostEquals(
    measured.mean.equivalent_width_angstrom.value,
    -widthInAngstrom(0.5 * 700 * Math.sqrt(2 * Math.PI), H_BETA.vacuum_angstrom),
    0.3,
  );
  assertAlmostEquals(measured.mean.profile.fwhm_kms.value, 700 * 2.3548, 60);
});

Deno.test("equivalentWidthError() agrees with resampling for photon noise and a continuum as long as the line", () => {
  // Vollmann & Eversberg 2006, Astron. Nachr. 327, 862, eq. 7; S/N of the averages.
  for (const height of [0, 1.5, -0.5]) {
    const pixels = 100;
    const mean = 400;
    const widths: number[] = [];
    for (let seed = 1; seed <= 2000; seed++) {
      const random = randomStream(seed);
      let line = 0;
      let continuum = 0;
      for (let i = 0; i < pixels; i++) {
        line += random.poisson(mean * (1 + height));
        continuum += random.poisson(mean);
      }
      widths.push(pixels * (line / continuum - 1));
    }
    const average = widths.reduce((a, b) => a + b, 0) / widths.length;
    const spread = Math.sqrt(widths.reduce((s, w) => s + (w - average) ** 2, 0) / widths.length);
    const formula = equivalentWidthError(height * pixels, {
      interval: pixels,
      signal_to_noise: Math.sqrt(mean),
      pixels,
    });
    // A spread from 2000 draws is known to 1.6 %.
    assertAlmostEquals(spread / formula, 1, 0.05, `height ${height}`);
  }
});
