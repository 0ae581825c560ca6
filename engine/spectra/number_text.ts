import type { SplitDate } from "../sky/mod.ts";

const DECIMAL = /^([+-]?)(\d*)(?:\.(\d*))?(?:[eEdD]([+-]?\d+))?$/;

/**
 * A decimal number written as text.
 *
 * @param text The text; an exponent may be marked D.
 * @returns The number; null when the text is none.
 *
 * @example
 * ```ts
 * import { numberOf } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(["1.5D2", "-3", "12:30", ""].map(numberOf), [150, -3, null, null]);
 * ```
 */
export function numberOf(text: string): number | null {
  const trimmed = text.trim();
  const match = DECIMAL.exec(trimmed);
  if (match === null || (match[2] === "" && (match[3] ?? "") === "")) return null;
  return Number(trimmed.replace(/[dD]/, "e"));
}

/**
 * A Julian date written as text, split so that no digit is lost.
 *
 * @param text A decimal number.
 * @returns Whole days and the rest; null when the text is no number.
 *
 * @example
 * ```ts
 * import { splitDateOf } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(splitDateOf("2460311.621071234567"), [2460311, 0.621071234567]);
 * ```
 */
export function splitDateOf(text: string): SplitDate | null {
  const value = numberOf(text);
  if (value === null) return null;
  const match = DECIMAL.exec(text.trim())!;
  if (match[4] !== undefined || match[1] === "-") {
    const whole = Math.floor(value);
    return [whole, value - whole];
  }
  return [Number(match[2] || "0"), Number(`0.${match[3] || "0"}`)];
}

/**
 * An angle or a time of day written in sexagesimal: parts separated by colons, blanks or letters.
 *
 * @param text Such as "-12 24 30.5" or "05h32m24s".
 * @returns Degrees or hours, as the first part was; null when the text is not of that form.
 *
 * @example
 * ```ts
 * import { sexagesimalOf } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(["-00:30:00", "05h30m", "83.1"].map(sexagesimalOf), [-0.5, 5.5, null]);
 * ```
 */
export function sexagesimalOf(text: string): number | null {
  const match =
    /^([+-]?)\s*(\d{1,3})[\s:hdHD°]+(\d{1,2})(?:[\s:mM'′]+(\d{1,2}(?:\.\d*)?)?)?\s*[sS"″]?$/
      .exec(text.trim());
  if (match === null) {
    const minutes = /^([+-]?)\s*(\d{1,3})[\s:hd°]+(\d{1,2}\.\d+)\s*[m'′]?$/i.exec(text.trim());
    if (minutes === null || Number(minutes[3]) >= 60) return null;
    return (minutes[1] === "-" ? -1 : 1) * (Number(minutes[2]) + Number(minutes[3]) / 60);
  }
  const [, sign, first, second, third] = match;
  if (Number(second) >= 60 || Number(third ?? 0) >= 60) return null;
  const size = Number(first) + Number(second) / 60 + Number(third ?? 0) / 3600;
  return sign === "-" ? -size : size;
}
