import { MJD_ZERO_JD } from "../constants.ts";
import { InputError } from "../errors.ts";
import { type SplitDate, splitDate } from "./bjd.ts";

const DECIMAL = /^\+?(\d+)(\.\d*)?$/;

function partsOf(value: number | string, action: string): [whole: number, fraction: number] {
  const text = String(value).trim();
  const decimal = DECIMAL.exec(text);
  // Whole and fraction are read apart: together they would be rounded to 40 µs.
  if (decimal) return [Number(decimal[1]), Number(`0${decimal[2] ?? ""}`)];
  const number = text === "" ? NaN : Number(text);
  if (!Number.isFinite(number)) {
    throw new InputError({ action, rule: "it must be a number", value });
  }
  return [Math.floor(number), number - Math.floor(number)];
}

/**
 * A Julian date given as one number or, so that no digit is lost, as its text.
 *
 * @param value Such as 2460311.5 or "2460311.62107345012".
 * @returns The date, in the scale of the number.
 * @throws {InputError} When it is no Julian date between the years 1858 and 2132: a modified or reduced one, say.
 *
 * @example
 * ```ts
 * import { julianDate } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(julianDate("2460311.621073450123"), [2460311, 0.621073450123]);
 * ```
 */
export function julianDate(value: number | string): SplitDate {
  const action = "read Julian date";
  const [whole, fraction] = partsOf(value, action);
  if (!(whole >= 2_400_000 && whole < 2_500_000)) {
    throw new InputError({
      action,
      rule: "it must be from 2400000 to 2500000",
      value,
      remedy: "a modified Julian date is one less 2400000.5",
    });
  }
  return [whole, fraction];
}

/**
 * The instant of a modified Julian date (JD − 2400000.5) given as one number or as its text.
 *
 * @param value Such as 60311.25 or "60311.25000000001".
 * @returns The date, in the scale of the number.
 * @throws {InputError} When it is no modified Julian date between the years 1858 and 2132.
 *
 * @example
 * ```ts
 * import { modifiedJulianDate } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(modifiedJulianDate(60311.25), [2460311, 0.75]);
 * ```
 */
export function modifiedJulianDate(value: number | string): SplitDate {
  const action = "read modified Julian date";
  const [whole, fraction] = partsOf(value, action);
  if (!(whole >= 0 && whole < 100_000)) {
    throw new InputError({ action, rule: "it must be from 0 to 100000", value });
  }
  return splitDate(whole + MJD_ZERO_JD.value, fraction);
}
