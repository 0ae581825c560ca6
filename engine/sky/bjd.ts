/**
 * An instant as Julian date in two parts, `[whole, fraction]`, whose sum is the date in days. One
 * double holds a Julian date to 40 µs only. The time scale and place are said by the name of the
 * field: BJD(TDB) unless stated. In UTC the fraction counts the true length of the UTC day, 86 401 s
 * when a leap second ends it.
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

/**
 * A date with whole days in the first part and a fraction in [0, 1) in the second, however its parts
 * were divided before.
 *
 * @param first One part, d.
 * @param second The other part, d.
 * @default second 0
 * @returns The same instant.
 *
 * @example
 * ```ts
 * import { splitDate } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(splitDate(2400000.5, 60311.25), [2460311, 0.75]);
 * ```
 */
export function splitDate(first: number, second = 0): SplitDate {
  let whole = Math.floor(first) + Math.floor(second);
  let fraction = (first - Math.floor(first)) + (second - Math.floor(second));
  whole += Math.floor(fraction);
  fraction -= Math.floor(fraction);
  return [whole, fraction];
}

/**
 * A date moved by some days.
 *
 * @param date The date; not in UTC, whose days differ in length.
 * @param days Days to add; may be negative.
 * @returns The later date, its fraction in [0, 1).
 *
 * @example
 * ```ts
 * import { addDays } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(addDays([2460311, 0.25], -0.5), [2460310, 0.75]);
 * ```
 */
export function addDays(date: SplitDate, days: number): SplitDate {
  const [whole, fraction] = splitDate(date[1], days);
  return splitDate(date[0] + whole, fraction);
}
