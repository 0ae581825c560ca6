import { InputError } from "../errors.ts";
import { type SplitDate, splitDate } from "./bjd.ts";
import { utcDayLength, utcDayOf } from "./leap_seconds.ts";
import type { TimeScale } from "./time_scales.ts";

const FORM =
  /^(\d{4})-(\d{1,2})-(\d{1,2})(?:[T ]\s*(\d{1,2}):(\d{2})(?::(\d{2}(?:\.\d*)?))?\s*Z?)?$/i;

// Julian day number of a Gregorian date at noon, and back (Fliegel & van Flandern 1968, CACM 11, 657).
function dayNumber(year: number, month: number, day: number): number {
  const a = Math.trunc((month - 14) / 12);
  return Math.trunc(1461 * (year + 4800 + a) / 4) + Math.trunc(367 * (month - 2 - 12 * a) / 12) -
    Math.trunc(3 * Math.trunc((year + 4900 + a) / 100) / 4) + day - 32_075;
}

function calendarOf(dayNumber: number): [year: number, month: number, day: number] {
  let l = dayNumber + 68_569;
  const n = Math.trunc(4 * l / 146_097);
  l -= Math.trunc((146_097 * n + 3) / 4);
  const i = Math.trunc(4000 * (l + 1) / 1_461_001);
  l += 31 - Math.trunc(1461 * i / 4);
  const j = Math.trunc(80 * l / 2447);
  const k = Math.trunc(j / 11);
  return [100 * (n - 49) + i + k, j + 2 - 12 * k, l - Math.trunc(2447 * j / 80)];
}

/**
 * Reads a date as ISO 8601 writes it: "2024-03-01", "2024-03-01T02:03", "2024-03-01T02:03:04.5", with or
 * without Z. In UTC a second of 60 is read where a leap second was.
 *
 * @param text The date and time.
 * @param scale Its time scale.
 * @default scale "utc"
 * @returns The instant, in the same scale.
 * @throws {InputError} When the text has another form, or is no instant of the calendar or the clock.
 *
 * @example
 * ```ts
 * import { parseIsoDate } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(parseIsoDate("2000-01-01T12:00:00"), [2451545, 0]);
 * ```
 */
export function parseIsoDate(text: string, scale: TimeScale = "utc"): SplitDate {
  const fail = (rule: string): never => {
    throw new InputError({
      action: "read date",
      rule,
      value: text,
      remedy: "write it as 2024-03-01T02:03:04.5",
    });
  };
  const parts = FORM.exec(text.trim()) ?? fail("it must be an ISO 8601 date");
  const [year, month, day, hour = 0, minute = 0] = parts.slice(1, 6).map((part) =>
    part === undefined ? undefined : Number(part)
  ) as [number, number, number, number?, number?];
  const second = Number(parts[6] ?? 0);
  const noon = dayNumber(year, month, day);
  const [, , back] = calendarOf(noon);
  if (month < 1 || month > 12 || day < 1 || back !== day) fail("there must be such a day");
  const into = 3600 * hour + 60 * minute + second;
  const length = scale === "utc" && second >= 60 ? utcDayLength(noon) : 86_400;
  const full = second >= 60 ? hour === 23 && minute === 59 && into < length : true;
  if (hour > 23 || minute > 59 || !full) fail("there must be such a time of day");
  const dayLength = scale === "utc" ? safeDayLength(noon) : 86_400;
  return splitDate(noon, into / dayLength - 0.5);
}

// Dates outside the leap-second table can be read; converting them is what fails.
function safeDayLength(day: number): number {
  try {
    return utcDayLength(day);
  } catch {
    return 86_400;
  }
}

/**
 * Writes a date as ISO 8601, in its own scale.
 *
 * @param date The date.
 * @param options Options.
 * @param options.scale Time scale of the date: in UTC a leap second is written as 60.
 * @default scale "utc"
 * @param options.digits Digits of the second, from 0 to 9.
 * @default digits 3
 * @returns Such as "2024-03-01T02:03:04.500".
 * @throws {InputError} When a digit count is out of range or the date is not finite.
 *
 * @example
 * ```ts
 * import { isoDate } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(isoDate([2451545, 0.25], { digits: 0 }), "2000-01-01T18:00:00");
 * ```
 */
export function isoDate(
  date: SplitDate,
  { scale = "utc", digits = 3 }: { scale?: TimeScale; digits?: number } = {},
): string {
  if (
    !Number.isInteger(digits) || digits < 0 || digits > 9 || !Number.isFinite(date[0] + date[1])
  ) {
    throw new InputError({
      action: "write date",
      rule: "the date must be finite and have 0 to 9 digits of the second",
      value: [date, digits],
    });
  }
  const unit = 10 ** digits;
  let day = utcDayOf(date);
  const [whole, fraction] = splitDate(date[0] - day, date[1] + 0.5);
  const length = scale === "utc" ? safeDayLength(day) : 86_400;
  let ticks = Math.round((whole + fraction) * length * unit);
  if (ticks >= length * unit) {
    ticks = 0;
    day += 1;
  }
  const seconds = Math.floor(ticks / unit);
  const minutes = Math.min(Math.floor(seconds / 60), 24 * 60 - 1);
  const two = (value: number) => String(value).padStart(2, "0");
  const [year, month, dayOfMonth] = calendarOf(day);
  const rest = digits === 0 ? "" : `.${String(ticks - seconds * unit).padStart(digits, "0")}`;
  return `${String(year).padStart(4, "0")}-${two(month)}-${two(dayOfMonth)}T` +
    `${two(Math.floor(minutes / 60))}:${two(minutes % 60)}:${two(seconds - 60 * minutes)}${rest}`;
}
