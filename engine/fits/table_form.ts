import { fitsError } from "./fits_error.ts";
import type { FitsErrorParts, Place } from "./fits_error.ts";

/** TFORM letters of a binary table's values. */
export type Letter = "L" | "X" | "B" | "I" | "J" | "K" | "A" | "E" | "D" | "C" | "M";

/** A binary table's column format, TFORMn, taken apart. */
export interface TableForm {
  /** Type of the values. */
  readonly letter: Letter;
  /** Number of values (bits for X, characters for A). */
  readonly repeat: number;
  /** Bytes of a descriptor when the values are kept in the heap: 8 for P, 16 for Q. */
  readonly descriptor: 0 | 8 | 16;
  /** Length of each string within the characters of a cell (the `rAw` convention); 0 when not given. */
  readonly string_length: number;
}

const BYTES: Readonly<Record<Letter, number>> = {
  L: 1,
  X: 1 / 8,
  B: 1,
  I: 2,
  J: 4,
  K: 8,
  A: 1,
  E: 4,
  D: 8,
  C: 8,
  M: 16,
};

/**
 * Bytes that a number of values take in the file.
 *
 * @param letter Their type.
 * @param count Their number.
 * @returns Bytes.
 */
export function bytesOf(letter: Letter, count: number): number {
  return Math.ceil(BYTES[letter] * count);
}

/**
 * Bytes that a column takes in each row.
 *
 * @param form Its format.
 * @returns Bytes.
 */
export function cellBytes({ letter, repeat, descriptor }: TableForm): number {
  return descriptor === 0 ? bytesOf(letter, repeat) : descriptor * repeat;
}

/**
 * Takes TFORMn of a binary table apart (FITS 4.0, 7.3.1 to 7.3.5).
 *
 * @param text The value.
 * @param parts Keyword and byte, for messages.
 * @param place File and HDU, for messages.
 * @returns The format.
 * @throws {InputError} If it is none.
 */
export function parseTableForm(text: string, parts: FitsErrorParts, place: Place): TableForm {
  const match = /^\s*(\d{0,15})([LXBIJKAEDCMPQ])(.*)$/.exec(text.toUpperCase());
  const [, digits = "", type = "", rest = ""] = match ?? [];
  const repeat = digits === "" ? 1 : Number(digits);
  const refuse = (rule: string) => fitsError(place, rule, { ...parts, value: text });
  if (match === null) {
    throw refuse("a column format must be a count and one of the letters LXBIJKAEDCMPQ");
  }
  if (type !== "P" && type !== "Q") {
    const string_length = type === "A" ? Number(/^\d{1,15}/.exec(rest)?.[0] ?? 0) : 0;
    return { letter: type as Letter, repeat, descriptor: 0, string_length };
  }
  const letter = /^([LXBIJKAEDCM])/.exec(rest)?.[1];
  if (letter === undefined || repeat > 1) {
    throw refuse("a format of arrays of varying length must be such as PE(12) or 1QJ");
  }
  return {
    letter: letter as Letter,
    repeat,
    descriptor: type === "P" ? 8 : 16,
    string_length: 0,
  };
}
