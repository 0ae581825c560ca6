import betainc from "@stdlib/betainc";
import erfcFunction from "@stdlib/erfc";
import erfcinv from "@stdlib/erfcinv";
import erfFunction from "@stdlib/erf";
import gammaln from "@stdlib/gammaln";
import { InputError } from "../errors.ts";
import { requirePositive } from "./require.ts";

/**
 * Error function, 2/√π ∫₀ˣ exp(−t²) dt.
 *
 * @param x Any number.
 * @returns Value from −1 to 1.
 *
 * @example
 * ```ts
 * import { erf } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(erf(Math.SQRT1_2), 0.6826894921370859, 1e-15);
 * ```
 */
export function erf(x: number): number {
  return erfFunction(x);
}

/**
 * Complementary error function, 1 − erf(x), with full relative precision for large x.
 *
 * @param x Any number.
 * @returns Value from 0 to 2.
 *
 * @example
 * ```ts
 * import { erfc } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(erfc(0), 1);
 * ```
 */
export function erfc(x: number): number {
  return erfcFunction(x);
}

/**
 * Natural logarithm of the gamma function.
 *
 * @param x Argument, above 0.
 * @returns ln Γ(x).
 *
 * @example
 * ```ts
 * import { gammaLn } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(gammaLn(5), Math.log(24), 1e-14);
 * ```
 */
export function gammaLn(x: number): number {
  return gammaln(x);
}

/**
 * Probability that a standard normal deviate exceeds z (one-sided).
 *
 * @param z Deviate, in standard deviations.
 * @returns Upper tail probability; twice it, for |z|, is the two-sided one.
 *
 * @example
 * ```ts
 * import { normalTail } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(normalTail(0), 0.5);
 * ```
 */
export function normalTail(z: number): number {
  return 0.5 * erfcFunction(z * Math.SQRT1_2);
}

/**
 * The standard normal deviate below which a given probability lies: the inverse of the cumulative
 * distribution. For a tiny upper tail p use `-normalQuantile(p)`.
 *
 * @param p Probability, between 0 and 1.
 * @returns The deviate; infinite at 0 and 1.
 * @throws {InputError} When `p` is outside [0, 1].
 *
 * @example
 * ```ts
 * import { normalQuantile } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(normalQuantile(0.975), 1.959963984540054, 1e-14);
 * ```
 */
export function normalQuantile(p: number): number {
  if (!(p >= 0 && p <= 1)) {
    throw new InputError({
      action: "find normal quantile",
      rule: "probability must be from 0 to 1",
      value: p,
    });
  }
  return p === 0.5 ? 0 : -Math.SQRT2 * erfcinv(2 * p);
}

/**
 * Probability that F exceeds a value, as for two nested fits: F = ((χ₁² − χ₂²)/dof1)/(χ₂²/dof2) with
 * dof1 the number of added parameters and dof2 the degrees of freedom of the richer fit.
 *
 * @param f Value of F, 0 or more; Infinity gives 0.
 * @param options Degrees of freedom of numerator and denominator.
 * @param options.dof1 Of the numerator, above 0.
 * @param options.dof2 Of the denominator, above 0.
 * @returns Upper tail probability.
 * @throws {InputError} When an argument is out of range.
 *
 * @example
 * ```ts
 * import { fTail } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // For dof1 = 2 the tail is (1 + 2 f/dof2)^(-dof2/2).
 * assertAlmostEquals(fTail(3, { dof1: 2, dof2: 10 }), 1.6 ** -5, 1e-14);
 * ```
 */
export function fTail(f: number, { dof1, dof2 }: { dof1: number; dof2: number }): number {
  requirePositive("find F tail", "F", f, { zero: true, infinity: true });
  requirePositive("find F tail", "degrees of freedom dof1", dof1);
  requirePositive("find F tail", "degrees of freedom dof2", dof2);
  if (f === Infinity) return 0;
  return betainc(dof2 / (dof2 + dof1 * f), dof2 / 2, dof1 / 2);
}

/**
 * Probability that Student's t exceeds a value (one-sided).
 *
 * @param t Value of t.
 * @param dof Degrees of freedom, above 0.
 * @returns Upper tail probability.
 * @throws {InputError} When `dof` is not positive.
 *
 * @example
 * ```ts
 * import { studentTail } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // One degree of freedom is the Cauchy distribution.
 * assertAlmostEquals(studentTail(1, 1), 0.25, 1e-15);
 * ```
 */
export function studentTail(t: number, dof: number): number {
  requirePositive("find Student tail", "degrees of freedom", dof);
  const tail = 0.5 * betainc(dof / (dof + t * t), dof / 2, 0.5);
  return t >= 0 ? tail : 1 - tail;
}
