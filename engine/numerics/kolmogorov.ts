import { requireCount } from "./require.ts";

/** Result of a one-sample Kolmogorov–Smirnov test. */
export interface KolmogorovTest {
  /** Largest distance of the empirical from the assumed cumulative distribution. */
  readonly distance: number;
  /** Probability of a distance at least so large when the assumption holds (two-sided). */
  readonly probability: number;
}

// Q(λ) = 2 Σ (−1)^(j−1) exp(−2 j² λ²), and its theta-function twin for small λ.
function kolmogorovTail(lambda: number): number {
  if (lambda < 0.2) return 1;
  if (lambda < 1.18) {
    const y = Math.exp(-(Math.PI ** 2) / (8 * lambda * lambda));
    return 1 - Math.sqrt(2 * Math.PI) / lambda * (y + y ** 9 + y ** 25 + y ** 49);
  }
  const x = Math.exp(-2 * lambda * lambda);
  return 2 * (x - x ** 4 + x ** 9);
}

/**
 * One-sample Kolmogorov–Smirnov test, with the effective λ = (√n + 0.12 + 0.11/√n) D of Stephens (1970,
 * J. R. Stat. Soc. B 32, 115), good to about 1 % of p from n = 5 on.
 *
 * @param values The sample, in any order.
 * @param cumulative Assumed cumulative distribution. Default: uniform on [0, 1], as of p-values.
 * @returns Distance and probability.
 * @throws {InputError} When the sample is empty.
 *
 * @example Evenly spread values are uniform, crowded ones are not
 * ```ts
 * import { kolmogorovSmirnov } from "@millrace/millrace/numerics";
 * import { assertGreater, assertLess } from "@std/assert";
 *
 * const even = Float64Array.from({ length: 50 }, (_, i) => (i + 0.5) / 50);
 * assertGreater(kolmogorovSmirnov(even).probability, 0.99);
 * assertLess(kolmogorovSmirnov(even.map((x) => x * x)).probability, 0.01);
 * ```
 */
export function kolmogorovSmirnov(
  values: ArrayLike<number>,
  cumulative: (value: number) => number = (value) => Math.min(1, Math.max(0, value)),
): KolmogorovTest {
  requireCount("test a distribution", values, 1);
  const sorted = Float64Array.from(values).sort();
  const n = sorted.length;
  const distance = sorted.reduce((largest, value, i) => {
    const expected = cumulative(value);
    return Math.max(largest, (i + 1) / n - expected, expected - i / n);
  }, 0);
  const root = Math.sqrt(n);
  return { distance, probability: kolmogorovTail((root + 0.12 + 0.11 / root) * distance) };
}
