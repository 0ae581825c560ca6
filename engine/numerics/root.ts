import { InputError, NotConverged } from "../errors.ts";

/**
 * Root of a function of one variable between two points where its sign differs, by Brent's method (1973,
 * "Algorithms for Minimization without Derivatives", ch. 4).
 *
 * @param f Continuous function.
 * @param bracket Two points where the signs of f differ, in either order.
 * @param options Options.
 * @param options.tolerance Absolute error allowed in the root; never finer than rounding allows.
 * @default tolerance 0, as fine as rounding allows
 * @returns The root.
 * @throws {InputError} When the signs do not differ, or f is not a number at an end.
 * @throws {NotConverged} When f is not a number inside, or after 200 steps; `partial` is the best point.
 *
 * @example
 * ```ts
 * import { findRoot } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(findRoot((x) => x * x - 2, [0, 2]), Math.SQRT2, 1e-15);
 * ```
 */
export function findRoot(
  f: (x: number) => number,
  bracket: readonly [low: number, high: number],
  { tolerance = 0 }: { tolerance?: number } = {},
): number {
  // b is the best root so far, a the one before it, c the far end of the bracket.
  let [a, b] = bracket;
  let fa = f(a);
  let fb = f(b);
  if (fa === 0) return a;
  if (fb === 0) return b;
  if (!(Math.sign(fa) * Math.sign(fb) < 0)) {
    throw new InputError({
      action: "find root",
      rule: "the function must change its sign over the bracket",
      value: [[a, fa], [b, fb]],
    });
  }
  let c = a;
  let fc = fa;
  let step = b - a;
  let before = step;
  for (let i = 0; i < 200; i++) {
    if (Math.sign(fb) === Math.sign(fc)) {
      c = a;
      fc = fa;
      step = before = b - a;
    }
    if (Math.abs(fc) < Math.abs(fb)) {
      [a, b, c] = [b, c, b];
      [fa, fb, fc] = [fb, fc, fb];
    }
    const least = 2 * Number.EPSILON * Math.abs(b) + 0.5 * tolerance;
    const half = 0.5 * (c - b);
    if (Math.abs(half) <= least || fb === 0) return b;
    if (Math.abs(before) >= least && Math.abs(fa) > Math.abs(fb)) {
      const s = fb / fa;
      let p: number, q: number;
      if (a === c) {
        p = 2 * half * s;
        q = 1 - s;
      } else {
        const r = fb / fc;
        const t = fa / fc;
        p = s * (2 * half * t * (t - r) - (b - a) * (r - 1));
        q = (t - 1) * (r - 1) * (s - 1);
      }
      if (p > 0) q = -q;
      p = Math.abs(p);
      if (2 * p < Math.min(3 * half * q - Math.abs(least * q), Math.abs(before * q))) {
        before = step;
        step = p / q;
      } else {
        step = before = half;
      }
    } else {
      step = before = half;
    }
    a = b;
    fa = fb;
    b += Math.abs(step) > least ? step : Math.sign(half) * Math.max(least, Number.MIN_VALUE);
    fb = f(b);
    if (Number.isNaN(fb)) {
      throw new NotConverged(`Cannot find root: the function is not a number at ${b}`, a);
    }
  }
  throw new NotConverged(`Cannot find root: 200 steps ended at ${b}, where f is ${fb}`, b);
}
