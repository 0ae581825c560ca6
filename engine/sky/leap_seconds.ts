import { InputError, type Warning } from "../errors.ts";
import type { SplitDate } from "./bjd.ts";

// Day (Julian date at its noon) at whose beginning TAI − UTC took a value, s: IERS Bulletin C.
const TABLE: readonly (readonly [day: number, seconds: number])[] = [
  [2441318, 10], // 1972 January 1
  [2441500, 11], // 1972 July 1
  [2441684, 12], // 1973 January 1
  [2442049, 13], // 1974 January 1
  [2442414, 14], // 1975 January 1
  [2442779, 15], // 1976 January 1
  [2443145, 16], // 1977 January 1
  [2443510, 17], // 1978 January 1
  [2443875, 18], // 1979 January 1
  [2444240, 19], // 1980 January 1
  [2444787, 20], // 1981 July 1
  [2445152, 21], // 1982 July 1
  [2445517, 22], // 1983 July 1
  [2446248, 23], // 1985 July 1
  [2447162, 24], // 1988 January 1
  [2447893, 25], // 1990 January 1
  [2448258, 26], // 1991 January 1
  [2448805, 27], // 1992 July 1
  [2449170, 28], // 1993 July 1
  [2449535, 29], // 1994 July 1
  [2450084, 30], // 1996 January 1
  [2450631, 31], // 1997 July 1
  [2451180, 32], // 1999 January 1
  [2453737, 33], // 2006 January 1
  [2454833, 34], // 2009 January 1
  [2456110, 35], // 2012 July 1
  [2457205, 36], // 2015 July 1
  [2457755, 37], // 2017 January 1
];

/** Day (Julian date at its noon) up to which the kept list of leap seconds is known to be complete. */
export const LEAP_SECONDS_KNOWN_UNTIL = 2461220; // 2026 June 28, IERS Bulletin C 70

const FIRST = TABLE[0]![0];
const LAST = 2488070; // 2100 January 1

/** The UTC day on which a date falls: Julian date at its noon. */
export function utcDayOf(utc: SplitDate): number {
  return Math.floor(utc[0]) + Math.floor((utc[0] - Math.floor(utc[0])) + utc[1] + 0.5);
}

/**
 * TAI − UTC during a UTC day. After the end of the kept list (28 June 2026) the last value is
 * returned; {@linkcode leapSecondWarnings} says so.
 *
 * @param day Julian date of the day at its noon, a whole number.
 * @returns Seconds.
 * @throws {InputError} Before 1972, when UTC ran at another rate, and from 2100 on.
 *
 * @example
 * ```ts
 * import { taiMinusUtc } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * // 31 December 2016 and the day after.
 * assertEquals([taiMinusUtc(2457754), taiMinusUtc(2457755)], [36, 37]);
 * ```
 */
export function taiMinusUtc(day: number): number {
  if (!(day >= FIRST && day < LAST)) {
    throw new InputError({
      action: "convert UTC",
      rule: "dates must be from 1972 January 1 to the end of 2099",
      value: day,
      unit: "JD",
      remedy: "check that the date is a Julian date in the scale that is stated",
    });
  }
  let seconds = 0;
  for (const [from, value] of TABLE) {
    if (day < from) break;
    seconds = value;
  }
  return seconds;
}

/** Length of a UTC day, s: 86401 when a leap second ends it. */
export function utcDayLength(day: number): number {
  const next = day + 1 < LAST ? taiMinusUtc(day + 1) : taiMinusUtc(day);
  return 86_400 + next - taiMinusUtc(day);
}

/**
 * A warning when a date lies beyond the kept list of leap seconds.
 *
 * @param utc The date, UTC.
 * @returns One warning, or none.
 *
 * @example
 * ```ts
 * import { leapSecondWarnings } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(leapSecondWarnings([2460000, 0]), []);
 * assertEquals(leapSecondWarnings([2470000, 0])[0]!.code, "leap-seconds-unknown");
 * ```
 */
export function leapSecondWarnings(utc: SplitDate): Warning[] {
  if (utcDayOf(utc) <= LEAP_SECONDS_KNOWN_UNTIL) return [];
  return [{
    code: "leap-seconds-unknown",
    text: "The date is after 2026 June 28, where the kept list of leap seconds ends: " +
      "each one introduced since then shifts times by 1 s",
  }];
}
