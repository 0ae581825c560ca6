import { assert, assertAlmostEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { kolmogorovSmirnov, normalTail, randomStream } from "@millrace/millrace/numerics";

// Smirnov's table, from memory: asymptotic 5 % point 1.3581, 1 % point 1.6276.
Deno.test("kolmogorovSmirnov() gives the tabulated points when samples are many", () => {
  const n = 1_000_000;
  const shifted = (lambda: number) =>
    Float64Array.from({ length: n }, (_, i) => (i + 1) / n - lambda / Math.sqrt(n));
  for (const [lambda, p] of [[1.3581, 0.05], [1.6276, 0.01], [0.8276, 0.5]] as const) {
    const { probability } = kolmogorovSmirnov(shifted(lambda), (x) => x);
    assertAlmostEquals(probability, p, 0.005 * p + 2e-4);
  }
});

Deno.test("kolmogorovSmirnov() rejects 5 % of samples when they are what is assumed", () => {
  let rejected = 0;
  for (let seed = 1; seed <= 2000; seed++) {
    const stream = randomStream(seed);
    const sample = Float64Array.from({ length: 40 }, () => stream.normal());
    if (kolmogorovSmirnov(sample, (z) => normalTail(-z)).probability < 0.05) rejected++;
  }
  // Binomial: 100 ± 9.7; three standard deviations.
  assert(Math.abs(rejected - 100) < 30, `${rejected} of 2000`);
});

Deno.test("kolmogorovSmirnov() refuses normal values when told they are uniform", () => {
  const stream = randomStream(3);
  const sample = Float64Array.from({ length: 100 }, () => stream.normal());
  assertLess(kolmogorovSmirnov(sample).probability, 1e-6);
});

Deno.test("kolmogorovSmirnov() has no jump when its two series meet", () => {
  const n = 100_000;
  const at = (lambda: number) =>
    kolmogorovSmirnov(
      Float64Array.from({ length: n }, (_, i) => (i + 1) / n - lambda / Math.sqrt(n)),
      (x) => x,
    ).probability;
  assertAlmostEquals(at(1.1792), at(1.1798), 1e-3);
});

Deno.test("kolmogorovSmirnov() throws when there is nothing to test", () => {
  assertThrows(() => kolmogorovSmirnov([]), InputError, "at least 1 value is needed");
});
