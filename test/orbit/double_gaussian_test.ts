import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  bisectorVelocity,
  centroidVelocity,
  crossCorrelate,
  doubleGaussianVelocity,
  type LineProfile,
} from "@millrace/millrace/orbit";
import { scanWings } from "../../engine/orbit/wing_scan.ts";
import { casesOf } from "./reference.ts";

function profileOf(velocity_kms: Float64Array, flux: Float64Array, error = 0.01): LineProfile {
  const step = velocity_kms[1]! - velocity_kms[0]!;
  return {
    velocity_kms,
    pixel_kms: velocity_kms.map(() => step),
    flux,
    error: velocity_kms.map(() => error),
  };
}

const grid = Float64Array.from({ length: 301 }, (_, k) => 20 * (k - 150));
const gauss = (centre: number, sigma: number) =>
  grid.map((v) => Math.exp(-0.5 * ((v - centre) / sigma) ** 2));

Deno.test("doubleGaussianVelocity() finds all reference roots and the one by the rule", () => {
  // reference/stats.json kind double_gauss: the same sums by Brent's method (scipy)
  for (const c of casesOf("stats", "double_gauss")) {
    const flux = Float64Array.from(c.s);
    const velocity = flux.map((_, k) => c.v0 + c.step * k);
    const found = doubleGaussianVelocity(profileOf(velocity, flux), {
      half_separation_kms: c.a,
      sigma_kms: c.w,
      search_kms: c.search + Math.abs(c.flux_weighted_mean),
    });
    const within = found.roots_kms.filter((root) => Math.abs(root) <= c.search);
    assertEquals(within.length, c.roots_sampled.length, c.id);
    within.forEach((root, k) => assertAlmostEquals(root, c.roots_sampled[k], 1e-6, c.id));
    assertAlmostEquals(found.velocity_kms, c.root_sampled, 1e-6, c.id);
  }
});

Deno.test("scanWings() interpolates its sums to a few parts in 1e5", () => {
  const random = randomStream(5);
  const flux = gauss(40, 500).map((f) => f + 0.05 * random.normal());
  const scan = scanWings(profileOf(grid, flux), 100);
  const highest = scan.smooth(40)[0];
  for (let at = -2900; at <= 2900; at += 17.3) {
    assertAlmostEquals(scan.quick(at) / highest, scan.smooth(at)[0] / highest, 5e-5, `${at}`);
  }
});

Deno.test("doubleGaussianVelocity() gives an error that the scatter confirms", () => {
  const clean = gauss(40, 500);
  const random = randomStream(12);
  const options = { half_separation_kms: 700, sigma_kms: 100 };
  const found = Array.from({ length: 300 }, () =>
    doubleGaussianVelocity(
      profileOf(grid, clean.map((f) => f + 0.03 * random.normal()), 0.03),
      options,
    ));
  const mean = found.reduce((sum, one) => sum + one.velocity_kms, 0) / 300;
  const scatter = Math.sqrt(found.reduce((s, one) => s + (one.velocity_kms - mean) ** 2, 0) / 299);
  const stated = found.reduce((sum, one) => sum + one.error_kms, 0) / 300;
  assertAlmostEquals(mean, 40, 4 * scatter / Math.sqrt(300));
  // 300 trials know a scatter to 4 per cent.
  assertAlmostEquals(scatter / stated, 1, 0.13);
});

Deno.test("doubleGaussianVelocity() bridges short gaps and refuses long ones in a window", () => {
  const options = { half_separation_kms: 700, sigma_kms: 100 };
  const whole = profileOf(grid, gauss(40, 500));
  const gap = (from: number, to: number): LineProfile => ({
    ...whole,
    flux: whole.flux.map((f, k) => grid[k]! >= from && grid[k]! <= to ? 0 : f),
    error: whole.error.map((e, k) => grid[k]! >= from && grid[k]! <= to ? Infinity : e),
  });
  const before = doubleGaussianVelocity(whole, options).velocity_kms;
  assertAlmostEquals(doubleGaussianVelocity(gap(730, 745), options).velocity_kms, before, 0.5);
  const hidden = doubleGaussianVelocity(gap(650, 900), options);
  assertEquals(hidden.velocity_kms, NaN);
  assertEquals(hidden.error_kms, Infinity);
  // A gap between the windows does not matter.
  assertAlmostEquals(doubleGaussianVelocity(gap(-200, 200), options).velocity_kms, before, 0.01);
  assertEquals(
    doubleGaussianVelocity(whole, { half_separation_kms: 2900, sigma_kms: 100 }).error_kms,
    Infinity,
  );
});

Deno.test("doubleGaussianVelocity() refuses widths that are not positive", () => {
  const profile = profileOf(grid, gauss(0, 500));
  assertThrows(
    () => doubleGaussianVelocity(profile, { half_separation_kms: -5, sigma_kms: 100 }),
    InputError,
    "half_separation_kms must be positive: current value is -5 km/s",
  );
  assertThrows(
    () => doubleGaussianVelocity(profile, { half_separation_kms: 500, sigma_kms: NaN }),
    InputError,
    "key sigma_kms",
  );
});

Deno.test("crossCorrelate() gives the reference functions and shifts", () => {
  // reference/stats.json kind xcor: direct sums (numpy); Tonry & Davis 1979
  for (const c of casesOf("stats", "xcor")) {
    const found = crossCorrelate(Float64Array.from(c.template), Float64Array.from(c.spectrum));
    assertAlmostEquals(found.peak_lag * c.dv, c.shift, 1e-8, c.id);
    assertAlmostEquals(found.peak, c.peak_c, 1e-10, c.id);
    const at = found.lag.indexOf(c.peak_lag);
    c.c_around_peak.forEach((value: number, k: number) =>
      assertAlmostEquals(found.correlation[at - 3 + k]!, value, 1e-10, c.id)
    );
  }
  assertThrows(() => crossCorrelate(grid, grid.slice(1)), InputError, "same number of samples");
  assertThrows(() => crossCorrelate(grid.map(() => 1), grid), InputError, "constant");
});

Deno.test("centroidVelocity() follows all light, with an error that the scatter confirms", () => {
  const clean = gauss(-60, 300).map((f, k) => f + 0.5 * gauss(700, 80)[k]!);
  const random = randomStream(5);
  const found = Array.from(
    { length: 300 },
    () => centroidVelocity(profileOf(grid, clean.map((f) => f + 0.02 * random.normal()), 0.02)),
  );
  const mean = found.reduce((sum, one) => sum + one.velocity_kms, 0) / 300;
  // (300·−60 + 0.5·80·700)/(300 + 40)
  assertAlmostEquals(mean, (300 * -60 + 40 * 700) / 340, 3);
  const scatter = Math.sqrt(found.reduce((s, one) => s + (one.velocity_kms - mean) ** 2, 0) / 299);
  assertAlmostEquals(scatter / found[0]!.error_kms, 1, 0.15);
  const empty = centroidVelocity(profileOf(grid, grid.map(() => 0.0001), 0.1));
  assertEquals(empty.error_kms, Infinity);
});

Deno.test("bisectorVelocity() takes the wings' middle in emission and absorption", () => {
  for (const sign of [1, -1]) {
    const profile = profileOf(grid, gauss(35, 400).map((f) => sign * f));
    const { velocity_kms, error_kms } = bisectorVelocity(profile, { level: 0.2 });
    assertAlmostEquals(velocity_kms, 35, 0.5);
    assert(error_kms > 0 && error_kms < 20);
  }
  assertEquals(bisectorVelocity(profileOf(grid, grid.map(() => 1))).error_kms, Infinity);
  assertThrows(() => bisectorVelocity(profileOf(grid, grid), { level: 1 }), InputError, "(0, 1)");
});
