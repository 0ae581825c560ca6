import { InputError } from "../errors.ts";
import { requireCount, requireSameLength } from "./require.ts";

/**
 * Quantile of a sample by linear interpolation between order statistics (Hyndman & Fan 1996,
 * definition 7). NaN values are left out.
 *
 * @param values The sample, in any order.
 * @param p Fraction from 0 (smallest) to 1 (largest).
 * @returns The quantile.
 * @throws {InputError} When no value is a number, or `p` is outside [0, 1].
 *
 * @example
 * ```ts
 * import { quantile } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(quantile([4, 1, 3, 2], 0.5), 2.5);
 * ```
 */
export function quantile(values: ArrayLike<number>, p: number): number {
  if (!(p >= 0 && p <= 1)) {
    throw new InputError({ action: "find quantile", rule: "p must be from 0 to 1", value: p });
  }
  const room = new Float64Array(values.length);
  let count = 0;
  for (let i = 0; i < values.length; i++) {
    if (!Number.isNaN(values[i]!)) room[count++] = values[i]!;
  }
  const sorted = room.subarray(0, count).sort();
  requireCount("find quantile", sorted, 1);
  const at = p * (sorted.length - 1);
  const below = Math.floor(at);
  const low = sorted[below]!;
  const high = sorted[Math.min(below + 1, sorted.length - 1)]!;
  return low === high ? low : low + (at - below) * (high - low);
}

/**
 * Median of a sample. NaN values are left out.
 *
 * @param values The sample, in any order.
 * @returns The median.
 * @throws {InputError} When no value is a number.
 *
 * @example
 * ```ts
 * import { median } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(median([9, 1, NaN, 2]), 2);
 * ```
 */
export function median(values: ArrayLike<number>): number {
  return quantile(values, 0.5);
}

/**
 * Standard deviation from the median absolute deviation, 1.4826 MAD: right for normal values and hardly
 * moved by outliers. NaN values are left out.
 *
 * @param values The sample, in any order.
 * @param centre Centre to measure from.
 * @default centre The median.
 * @returns The standard deviation of the bulk of the sample.
 * @throws {InputError} When no value is a number.
 *
 * @example
 * ```ts
 * import { robustSigma } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(robustSigma([-1, 0, 1, 1e9, -1, 1, 0]), 1.482602218505602);
 * ```
 */
export function robustSigma(values: ArrayLike<number>, centre: number = median(values)): number {
  return 1.482602218505602 * median(Float64Array.from(values, (value) => Math.abs(value - centre)));
}

/** A mean with its error. */
export interface WeightedMean {
  /** The mean. */
  readonly mean: number;
  /** One standard deviation of the mean, from the given errors. */
  readonly error: number;
  /** Chi-square about the mean. */
  readonly chi_square: number;
  /** How many values counted. */
  readonly count: number;
}

/**
 * Mean weighted by 1/error². Values with infinite error are masked and do not count.
 *
 * @param values N values.
 * @param errors N standard deviations, positive; infinite where masked.
 * @returns Mean, its error and chi-square.
 * @throws {InputError} When lengths differ, an error is not positive, or nothing is left.
 *
 * @example
 * ```ts
 * import { weightedMean } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { mean, error } = weightedMean([1, 4, 99], [1, 2, Infinity]);
 * assertAlmostEquals(mean, 1.6, 1e-15);
 * assertAlmostEquals(error, Math.sqrt(0.8), 1e-15);
 * ```
 */
export function weightedMean(
  values: ArrayLike<number>,
  errors: ArrayLike<number>,
): WeightedMean {
  const action = "find weighted mean";
  requireSameLength(action, "values and errors", values.length, errors.length);
  let weight = 0, sum = 0, count = 0;
  for (let i = 0; i < values.length; i++) {
    const error = errors[i]!;
    if (!(error > 0)) {
      throw new InputError({ action, rule: "errors must be positive", value: error });
    }
    if (error === Infinity) continue;
    weight += 1 / (error * error);
    sum += values[i]! / (error * error);
    count++;
  }
  if (count === 0) {
    throw new InputError({ action, rule: "at least one value must be unmasked", value: 0 });
  }
  const mean = sum / weight;
  let chiSquare = 0;
  for (let i = 0; i < values.length; i++) {
    if (errors[i] !== Infinity) chiSquare += ((values[i]! - mean) / errors[i]!) ** 2;
  }
  return { mean, error: 1 / Math.sqrt(weight), chi_square: chiSquare, count };
}
