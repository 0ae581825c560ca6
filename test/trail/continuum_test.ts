import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import { fitContinuum, type LineStrip } from "../../engine/trail/mod.ts";

const WINDOWS = [[-6000, -3000], [3000, 6000]] as const;

function strip(flux: (v: number, i: number) => number, error: (v: number) => number): LineStrip {
  const velocity_kms = Float64Array.from({ length: 401 }, (_, i) => 30 * (i - 200));
  return {
    spectrum: null as never,
    first: 0,
    velocity_kms,
    pixel_kms: velocity_kms.map(() => 30),
    flux: velocity_kms.map(flux),
    error: velocity_kms.map(error),
  };
}

Deno.test("fitContinuum() finds a polynomial of its own order exactly, whatever stands between the windows", () => {
  for (const order of [0, 1, 2, 3]) {
    const shape = (v: number) =>
      [5, 0.8, -0.4, 0.2].slice(0, order + 1)
        .reduce((sum, c, n) => sum + c * (v / 6000) ** n, 0);
    const continuum = fitContinuum(
      strip((v) => shape(v) + (Math.abs(v) < 2500 ? 20 : 0), () => 0.1),
      { windows_kms: WINDOWS, order },
    )!;
    assertAlmostEquals(continuum.at_line, shape(0), 1e-9);
    assertAlmostEquals(continuum.level[0]!, shape(-6000), 1e-9);
  }
});

Deno.test("fitContinuum() is not moved by weak lines and cosmic rays in its windows", () => {
  const random = randomStream(5);
  const continuum = fitContinuum(
    strip(
      (v, i) =>
        10 + 0.1 * random.normal() + 3 * Math.exp(-(((v - 4200) / 150) ** 2)) +
        (i % 37 === 0 ? 8 : 0),
      () => 0.1,
    ),
    { windows_kms: WINDOWS },
  )!;
  // 190 clean pixels of error 0.1 give the level to 0.008; wings of the weak line below the clip
  // may add as much again.
  assertAlmostEquals(continuum.at_line, 10, 0.03);
});

Deno.test("fitContinuum() is unbiased for photon noise, where weights from each pixel's own counts are not", () => {
  let ours = 0;
  let theirs = 0;
  const trials = 40;
  for (let seed = 1; seed <= trials; seed++) {
    const random = randomStream(seed);
    const counts = Array.from({ length: 401 }, () => Math.max(1, random.poisson(20)));
    const pixels = strip((_, i) => counts[i]!, () => 1);
    const own = { ...pixels, error: pixels.flux.map(Math.sqrt) };
    ours += fitContinuum(own, { windows_kms: WINDOWS, order: 0, clip: 6 })!.at_line / trials;
    const weights = counts.map((c) => 1 / c);
    theirs += counts.length / weights.reduce((a, b) => a + b, 0) / trials;
  }
  // 40 × 202 pixels of 20 ± 4.5 counts: the mean is known to 0.05.
  assertAlmostEquals(ours, 20, 0.2);
  assert(theirs < 19.5, `the biased estimate is ${theirs}`);
});

Deno.test("fitContinuum() says the error of the level that a hundred repeats show", () => {
  const levels: number[] = [];
  let said = 0;
  for (let seed = 1; seed <= 100; seed++) {
    const random = randomStream(seed);
    const continuum = fitContinuum(strip(() => 10 + 0.5 * random.normal(), () => 0.5), {
      windows_kms: WINDOWS,
    })!;
    levels.push(continuum.at_line);
    said += continuum.at_line_error / 100;
  }
  const spread = Math.sqrt(levels.reduce((s, l) => s + (l - 10) ** 2, 0) / 100);
  // A spread from 100 repeats is known to 7 %; three times that, and the growth by max(1, scatter).
  assertAlmostEquals(spread / said, 1, 0.21);
});

Deno.test("fitContinuum() leaves the slope out when one side alone is seen", () => {
  const continuum = fitContinuum(
    {
      ...strip((v) => 10 + v / 1000, () => 0.1),
      error: Float64Array.from({ length: 401 }, (_, i) => i > 200 ? Infinity : 0.1),
    },
    { windows_kms: WINDOWS, order: 1 },
  )!;
  assertEquals([continuum.order, continuum.windows_seen], [0, 1]);
  assertAlmostEquals(continuum.at_line, 5.5, 0.1);
});

Deno.test("fitContinuum() gives null when everything is masked", () => {
  assertEquals(fitContinuum(strip(() => 0, () => Infinity), { windows_kms: WINDOWS }), null);
});
