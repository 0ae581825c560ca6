/**
 * An instant as Julian date in two parts, `[whole, fraction]`, whose sum is the date in days. One
 * double holds a Julian date to 40 µs only. The time scale and place are said by the name of the
 * field: BJD(TDB) unless stated.
 */
export type SplitDate = readonly [whole: number, fraction: number];

/**
 * Difference of two dates in days, exact to the precision of their fractions.
 *
 * @param later Minuend.
 * @param earlier Subtrahend.
 * @returns `later − earlier` in days.
 *
 * @example
 * ```ts
 * import { daysBetween } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(daysBetween([2460311, 0.25], [2460310, 0.75]), 0.5, 1e-15);
 * ```
 */
export function daysBetween(later: SplitDate, earlier: SplitDate): number {
  return (later[0] - earlier[0]) + (later[1] - earlier[1]);
}
