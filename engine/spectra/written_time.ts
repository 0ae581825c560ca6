import { InputError } from "../errors.ts";
import { parseIsoDate, type SplitDate, splitDate } from "../sky/mod.ts";
import { numberOf, sexagesimalOf, splitDateOf } from "./number_text.ts";

/** A date and time as it is written. */
export interface WrittenTime {
  /** As a Julian date in its own scale: whole days and the rest. */
  readonly date: SplitDate;
  /** How it was written. "date" has no time of day. */
  readonly form: "iso" | "date" | "jd" | "mjd" | "reduced-jd";
}

function isoOrNull(text: string): SplitDate | null {
  try {
    return parseIsoDate(text);
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}

/**
 * Reads a date as headers and logs write it: ISO 8601, the old DD/MM/YY of FITS, a Julian date, a
 * modified or a reduced one.
 *
 * @param text The value.
 * @param key Key under which it stands: "MJD" in it makes five digits a modified Julian date;
 * otherwise five digits after a "JD" are a Julian date less 2 400 000.
 * @returns The date; null when the text is none.
 *
 * @example
 * ```ts
 * import { writtenTime } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(writtenTime("2024-01-02T12:00:00", "DATE-OBS")?.date, [2460312, 0]);
 * assertEquals(writtenTime("60311.5", "MJD-OBS")?.date, [2460312, 0]);
 * assertEquals(writtenTime("60312.25", "HJD")?.form, "reduced-jd");
 * ```
 */
export function writtenTime(text: string, key: string): WrittenTime | null {
  const trimmed = text.trim();
  if (/^\d{4}-/.test(trimmed)) {
    const date = isoOrNull(trimmed);
    return date === null ? null : { date, form: /[T ]\s*\d/.test(trimmed) ? "iso" : "date" };
  }
  const old = /^(\d{2})\/(\d{2})\/(\d{2})$/.exec(trimmed);
  if (old !== null) {
    // FITS 4.0, section 9.1.1: this form means a year of the twentieth century.
    const date = isoOrNull(`19${old[3]}-${old[2]}-${old[1]}`);
    return date === null ? null : { date, form: "date" };
  }
  const split = splitDateOf(trimmed);
  if (split === null) return null;
  const value = split[0] + split[1];
  if (value > 2.2e6 && value < 2.6e6) return { date: split, form: "jd" };
  if (!(value > 1e4 && value < 1e5)) return null;
  if (/MJD/i.test(key) || !/JD/i.test(key)) {
    return { date: splitDate(2400000 + split[0], split[1] + 0.5), form: "mjd" };
  }
  return { date: [2400000 + split[0], split[1]], form: "reduced-jd" };
}

/**
 * Adds the time of day to a date without one.
 *
 * @param date The date at its beginning.
 * @param text Time of day: sexagesimal hours, or decimal hours below 24, or seconds.
 * @returns The date with the time; null when the text is no time of day.
 *
 * @example
 * ```ts
 * import { withTimeOfDay } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(withTimeOfDay([2460311, 0.5], "18:00:00"), [2460312, 0.25]);
 * ```
 */
export function withTimeOfDay(date: SplitDate, text: string): SplitDate | null {
  const plain = numberOf(text);
  const hours = sexagesimalOf(text) ?? (plain === null ? null : plain < 24 ? plain : plain / 3600);
  if (hours === null || !(hours >= 0 && hours < 24.001)) return null;
  return splitDate(date[0], date[1] + hours / 24);
}
