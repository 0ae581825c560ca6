import { InputError } from "../errors.ts";

const PARTS =
  /^([+\-−–]?)\s*(\d{1,3})(?:[\s:hd°]+)(\d{1,2}(?:\.\d+)?)(?:[\s:m'′]+(\d{1,2}(?:\.\d*)?)?[\s"″s]*)?$/i;
const PLAIN = /^([+\-−–]?)\s*(\d+(?:\.\d*)?|\.\d+)\s*(h|d|°|deg)?$/i;

// Value in units of the first part, and whether minutes were given.
function read(text: string, action: string): { value: number; sexagesimal: boolean; unit: string } {
  const trimmed = text.trim();
  const plain = PLAIN.exec(trimmed);
  if (plain) {
    const value = Number(plain[2]) * (plain[1] && plain[1] !== "+" ? -1 : 1);
    return { value, sexagesimal: false, unit: (plain[3] ?? "").toLowerCase() };
  }
  const parts = PARTS.exec(trimmed);
  const minutes = Number(parts?.[3] ?? 0);
  const seconds = Number(parts?.[4] ?? 0);
  const broken = parts?.[3]?.includes(".") && parts?.[4] !== undefined;
  if (!parts || minutes >= 60 || seconds >= 60 || broken) {
    throw new InputError({
      action,
      rule: "it must be a number of degrees or sexagesimal, with minutes and seconds below 60",
      value: text,
    });
  }
  // The sign belongs to the whole: "-00 30" is negative.
  const sign = parts[1] && parts[1] !== "+" ? -1 : 1;
  const unit = /^[+\-−–]?\s*\d+\s*h/i.test(trimmed) ? "h" : "";
  return {
    value: sign * (Number(parts[2]) + minutes / 60 + seconds / 3600),
    sexagesimal: true,
    unit,
  };
}

/**
 * Reads a right ascension: "05:32:24.1", "5h32m24.1s" and the like are hours, a plain number is degrees as FITS
 * headers have it.
 *
 * @param text The right ascension.
 * @returns Degrees, in [0, 360).
 * @throws {InputError} When it has another form or is out of range.
 *
 * @example
 * ```ts
 * import { parseRightAscension } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(parseRightAscension("06:00:00"), 90);
 * assertEquals(parseRightAscension("83.1"), 83.1);
 * ```
 */
export function parseRightAscension(text: string): number {
  const action = "read right ascension";
  const { value, sexagesimal, unit } = read(text, action);
  const degrees = sexagesimal || unit === "h" ? value * 15 : value;
  if (!(degrees >= 0 && degrees <= 360)) {
    throw new InputError({
      action,
      rule: "it must be from 0 to 24 hours or 0 to 360 degrees",
      value: text,
    });
  }
  return degrees === 360 ? 0 : degrees;
}

/**
 * Reads a declination, sexagesimal or plain, in degrees.
 *
 * @param text The declination.
 * @returns Degrees, from −90 to 90.
 * @throws {InputError} When it has another form or is out of range.
 *
 * @example
 * ```ts
 * import { parseDeclination } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(parseDeclination("-00 30 00"), -0.5);
 * ```
 */
export function parseDeclination(text: string): number {
  const action = "read declination";
  const { value, unit } = read(text, action);
  if (!(Math.abs(value) <= 90) || unit === "h") {
    throw new InputError({ action, rule: "it must be from -90 to 90 degrees", value: text });
  }
  return value;
}
