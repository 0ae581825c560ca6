import gammaln from "@stdlib/gammaln";

// ln Γ(a + 1) − [a ln a − a + ½ ln 2πa]: Stirling's series where it converges to full precision.
function stirlingRest(a: number): number {
  if (a < 16) return gammaln(a + 1) - (a * Math.log(a) - a + 0.5 * Math.log(2 * Math.PI * a));
  const s = 1 / (a * a);
  return (1 / 12 - s * (1 / 360 - s * (1 / 1260 - s * (1 / 1680 - s / 1188)))) / a;
}

// a ln(a/x) + x − a without the cancellation that the plain form has near a = x.
function deviance(a: number, x: number): number {
  const v = (a - x) / (a + x);
  if (Math.abs(v) > 0.1) return a * Math.log(a / x) + x - a;
  let sum = (a - x) * v;
  let power = 2 * a * v;
  for (let j = 1; j < 100; j++) {
    power *= v * v;
    const next = sum + power / (2 * j + 1);
    if (next === sum) break;
    sum = next;
  }
  return sum;
}

/**
 * Natural logarithm of e^−x x^a / Γ(a + 1), the Poisson probability of a events where x are expected,
 * continued to any a ≥ 0, by the saddle-point form of Loader (2000, "Fast and accurate computation of
 * binomial probabilities"), which keeps full relative precision when both are large.
 *
 * @param a Count, 0 or more.
 * @param x Mean, 0 or more.
 * @returns The logarithm; −Infinity where the probability is 0.
 *
 * @example
 * ```ts
 * import { lnPoisson } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(Math.exp(lnPoisson(2, 3)), 4.5 * Math.exp(-3), 1e-15);
 * ```
 */
export function lnPoisson(a: number, x: number): number {
  if (x === 0) return a === 0 ? 0 : -Infinity;
  if (a === 0) return -x;
  return -stirlingRest(a) - deviance(a, x) - 0.5 * Math.log(2 * Math.PI * a);
}
