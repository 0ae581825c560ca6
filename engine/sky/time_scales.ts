import { DAY_S, TT_MINUS_TAI_S } from "../constants.ts";
import { addDays, daysBetween, type SplitDate, splitDate } from "./bjd.ts";
import { taiMinusUtc, utcDayLength, utcDayOf } from "./leap_seconds.ts";

const day_s = DAY_S.value;

/**
 * TT of an instant in UTC, right within a leap second too.
 *
 * @param utc Date, UTC.
 * @returns Date, TT.
 * @throws {InputError} Before 1972 and from 2100 on.
 *
 * @example
 * ```ts
 * import { daysBetween, utcToTt } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const utc = [2460311, 0.5] as const;
 * assertAlmostEquals(daysBetween(utcToTt(utc), utc) * 86400, 69.184, 1e-9);
 * ```
 */
export function utcToTt(utc: SplitDate): SplitDate {
  const day = utcDayOf(utc);
  const into = daysBetween(utc, [day, -0.5]) * utcDayLength(day);
  const seconds = into + taiMinusUtc(day) + TT_MINUS_TAI_S.value;
  return addDays([day, -0.5], seconds / day_s);
}

/**
 * UTC of an instant in TT.
 *
 * @param tt Date, TT.
 * @returns Date, UTC.
 * @throws {InputError} Before 1972 and from 2100 on.
 *
 * @example
 * ```ts
 * import { daysBetween, ttToUtc, utcToTt } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const tt = [2457754, 0.5008] as const;
 * assertAlmostEquals(daysBetween(utcToTt(ttToUtc(tt)), tt), 0, 1e-15);
 * ```
 */
export function ttToUtc(tt: SplitDate): SplitDate {
  const sinceNoon = (day: number) => daysBetween(tt, [day, -0.5]) * day_s - TT_MINUS_TAI_S.value;
  let day = utcDayOf(addDays(tt, -TT_MINUS_TAI_S.value / day_s));
  let into = sinceNoon(day) - taiMinusUtc(day);
  if (into < 0) {
    day -= 1;
    into = sinceNoon(day) - taiMinusUtc(day);
  }
  return addDays([day, -0.5], into / utcDayLength(day));
}

/**
 * TDB − TT at the centre of the Earth (USNO Circular 179, eq. 2.6: good to 10 µs from 1600 to 2200; a place on
 * the ground adds 2 µs at most).
 *
 * @param tt Date, TT or TDB.
 * @returns Seconds.
 *
 * @example
 * ```ts
 * import { tdbMinusTt } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(tdbMinusTt([2458943, 0.588]), 0.001677, 1e-5);
 * ```
 */
export function tdbMinusTt(tt: SplitDate): number {
  const t = daysBetween(tt, [2451545, 0]) / 36_525;
  return 0.001657 * Math.sin(628.3076 * t + 6.2401) +
    0.000022 * Math.sin(575.3385 * t + 4.2970) +
    0.000014 * Math.sin(1256.6152 * t + 6.1969) +
    0.000005 * Math.sin(606.9777 * t + 4.0212) +
    0.000005 * Math.sin(52.9691 * t + 0.4444) +
    0.000002 * Math.sin(21.3299 * t + 5.5431) +
    0.000010 * t * Math.sin(628.3076 * t + 4.2490);
}

/** Time scale of a date. */
export type TimeScale = "utc" | "tai" | "tt" | "tdb";

/**
 * TT of an instant in any scale.
 *
 * @param date The date.
 * @param scale Its scale.
 * @returns Date, TT.
 * @throws {InputError} For UTC before 1972 and from 2100 on.
 *
 * @example
 * ```ts
 * import { daysBetween, toTt } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(daysBetween(toTt([2460311, 0], "tai"), [2460311, 0]) * 86400, 32.184, 1e-10);
 * ```
 */
export function toTt(date: SplitDate, scale: TimeScale): SplitDate {
  switch (scale) {
    case "utc":
      return utcToTt(date);
    case "tai":
      return addDays(date, TT_MINUS_TAI_S.value / day_s);
    case "tt":
      return splitDate(date[0], date[1]);
    case "tdb":
      return addDays(date, -tdbMinusTt(date) / day_s);
  }
}

/**
 * TDB of an instant in TT.
 *
 * @param tt Date, TT.
 * @returns Date, TDB.
 *
 * @example
 * ```ts
 * import { daysBetween, toTt, ttToTdb } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const tt = [2460311, 0.25] as const;
 * assertAlmostEquals(daysBetween(toTt(ttToTdb(tt), "tdb"), tt), 0, 1e-15);
 * ```
 */
export function ttToTdb(tt: SplitDate): SplitDate {
  return addDays(tt, tdbMinusTt(tt) / day_s);
}
