import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import { estimateErrors } from "../../engine/spectra/mod.ts";

const PIXELS = 800;

function fluxes(
  make: (level: number, noise: (mean: number) => number, i: number) => number,
  count = 30,
): Float64Array[] {
  const random = randomStream(8);
  return Array.from({ length: count }, (_, k) => {
    const level = 200 * (1 + 0.8 * Math.sin(k));
    return Float64Array.from(
      { length: PIXELS },
      (_, i) => make(level, (m) => random.poisson(m), i),
    );
  });
}

const line = (i: number) => 1 + 2 * Math.exp(-0.5 * ((i - 400) / 8) ** 2);

// Median over pixels and spectra of the estimate over the truth.
function ratio(error: readonly Float64Array[], truth: (k: number, i: number) => number): number {
  const all = error.flatMap((e, k) => [...e].map((s, i) => s / truth(k, i))).sort((a, b) => a - b);
  return all[all.length >> 1]!;
}

Deno.test("estimateErrors() finds photon noise that grows with the flux, and the gain", () => {
  // A gain of 2.5: flux = photons / 2.5, so that variance = flux / 2.5.
  const data = fluxes((level, noise, i) => noise(2.5 * level * line(i)) / 2.5);
  const estimated = estimateErrors(data)!;
  // 24 000 differences in 12 bins: the slope is known to 2 %.
  assertAlmostEquals(estimated.growth, 1 / 2.5, 0.04);
  const truth = (k: number, i: number) => Math.sqrt(200 * (1 + 0.8 * Math.sin(k)) * line(i) / 2.5);
  assertAlmostEquals(ratio(estimated.error, truth), 1, 0.03);
  // In the line, where the photons are.
  const inLine = estimated.error.map((e, k) => e[400]! / truth(k, 400)).sort((a, b) => a - b);
  assertAlmostEquals(inLine[15]!, 1, 0.1);
});

Deno.test("estimateErrors() finds noise of the detector that does not grow", () => {
  const random = randomStream(2);
  const data = fluxes((level, _, i) => level * line(i) + 12 * random.normal());
  const estimated = estimateErrors(data)!;
  assertAlmostEquals(ratio(estimated.error, () => 12), 1, 0.03);
  assert(estimated.growth * 200 < 0.1 * estimated.floor);
});

Deno.test("estimateErrors() is not misled by the correlation that resampling leaves, and tells it", () => {
  const random = randomStream(3);
  const data = fluxes(() => 0).map(() => {
    const raw = Float64Array.from(
      { length: PIXELS + 1 },
      (_, i) => 500 * line(i) + 10 * random.normal(),
    );
    return Float64Array.from({ length: PIXELS }, (_, i) => 0.5 * (raw[i]! + raw[i + 1]!));
  });
  const estimated = estimateErrors(data)!;
  assertAlmostEquals(ratio(estimated.error, () => 10 / Math.SQRT2), 1, 0.03);
  // 24 000 overlapping differences count as 10 000: a variance is known to 2.3 %, a correlation,
  // from two of them over 1.5, to 0.022; three times that.
  assertAlmostEquals(estimated.lag_correlation[0], 0.5, 0.066);
  assertAlmostEquals(estimated.lag_correlation[1], 0, 0.066);
  const plain = estimateErrors(fluxes((level, noise, i) => noise(level * line(i))))!;
  assertAlmostEquals(plain.lag_correlation[0], 0, 0.066);
});

Deno.test("estimateErrors() masks what is not a number and gives null without scatter", () => {
  const data = fluxes((level, noise, i) => i === 5 ? NaN : noise(level));
  const before = structuredClone(data);
  const { error } = estimateErrors(data)!;
  assertEquals([error[0]![5], error[0]![6]! < Infinity], [Infinity, true]);
  assertEquals(data, before);
  assertEquals(estimateErrors([new Float64Array(200).fill(3)]), null);
  assertEquals(estimateErrors([Float64Array.of(1, 2, 3)]), null);
});

Deno.test("estimateErrors() tells correlation over two pixels", () => {
  const random = randomStream(6);
  const data = Array.from({ length: 30 }, () => {
    const raw = Float64Array.from({ length: PIXELS + 2 }, () => 500 + 10 * random.normal());
    return Float64Array.from(
      { length: PIXELS },
      (_, i) => (raw[i]! + raw[i + 1]! + raw[i + 2]!) / 3,
    );
  });
  // The mean of three neighbours: correlations 2/3 and 1/3; errors as above.
  const [one, two] = estimateErrors(data)!.lag_correlation;
  assertAlmostEquals(one, 2 / 3, 0.066);
  assertAlmostEquals(two, 1 / 3, 0.066);
});
