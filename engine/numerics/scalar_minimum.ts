import { InputError } from "../errors.ts";

/** Minimum of a function of one variable. */
export interface ScalarMinimum {
  /** Where it is. */
  readonly x: number;
  /** Value there. */
  readonly value: number;
}

const GOLDEN = (3 - Math.sqrt(5)) / 2;

/**
 * Local minimum of a function of one variable within an interval, by Brent's method (1973, ch. 5): golden
 * sections and parabolas. With several minima it finds one of them. An end of the interval is only approached.
 *
 * @param f Function; values that are not numbers count as +Infinity.
 * @param interval The interval, lower end first.
 * @param options Options.
 * @param options.tolerance Error allowed in x, as a fraction of the interval's length or of |x|.
 * @default tolerance 1e-8, about the square root of the rounding error: finer is noise
 * @returns Place and value.
 * @throws {InputError} When the interval is empty or not finite.
 *
 * @example
 * ```ts
 * import { minimiseScalar } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(minimiseScalar(Math.cos, [2, 4]).x, Math.PI, 1e-7);
 * ```
 */
export function minimiseScalar(
  f: (x: number) => number,
  interval: readonly [low: number, high: number],
  { tolerance = 1e-8 }: { tolerance?: number } = {},
): ScalarMinimum {
  let [low, high] = interval;
  if (!(low < high && high - low < Infinity)) {
    throw new InputError({
      action: "find minimum",
      rule: "the interval must be finite, lower end first",
      value: interval,
    });
  }
  const evaluate = (x: number) => {
    const value = f(x);
    return Number.isNaN(value) ? Infinity : value;
  };
  const floor = tolerance * (high - low) * 0.1;
  // x is the best point, w the second best, v the one that w replaced.
  let x = low + GOLDEN * (high - low);
  let w = x, v = x;
  let fx = evaluate(x);
  let fw = fx, fv = fx;
  let step = 0, before = 0;
  for (let i = 0; i < 500; i++) {
    const middle = 0.5 * (low + high);
    const least = tolerance * Math.abs(x) * 0.1 + floor;
    if (Math.abs(x - middle) <= 2 * least - 0.5 * (high - low)) break;
    let p = 0, q = 0, r = 0;
    if (Math.abs(before) > least) {
      r = (x - w) * (fx - fv);
      q = (x - v) * (fx - fw);
      p = (x - v) * q - (x - w) * r;
      q = 2 * (q - r);
      if (q > 0) p = -p;
      q = Math.abs(q);
      r = before;
      before = step;
    }
    if (Math.abs(p) < Math.abs(0.5 * q * r) && p > q * (low - x) && p < q * (high - x)) {
      step = p / q;
      const u = x + step;
      if (u - low < 2 * least || high - u < 2 * least) step = x < middle ? least : -least;
    } else {
      before = x < middle ? high - x : low - x;
      step = GOLDEN * before;
    }
    const u = x + (Math.abs(step) >= least ? step : step > 0 ? least : -least);
    const fu = evaluate(u);
    if (fu <= fx) {
      if (u < x) high = x;
      else low = x;
      [v, fv, w, fw, x, fx] = [w, fw, x, fx, u, fu];
    } else {
      if (u < x) low = u;
      else high = u;
      if (fu <= fw || w === x) [v, fv, w, fw] = [w, fw, u, fu];
      else if (fu <= fv || v === x || v === w) [v, fv] = [u, fu];
    }
  }
  return { x, value: fx };
}
