import type { ColumnHead } from "./column.ts";
import type { Scaling } from "./decode_numbers.ts";
import type { FitsHeader } from "./header.ts";

/** Names, units and the like, which ASCII and binary tables write alike. */
export type ColumnTexts = Pick<
  ColumnHead,
  "name" | "number" | "format" | "unit" | "description" | "display"
>;

/**
 * Reads what the header says of a column in both kinds of table.
 *
 * @param header The header.
 * @param number Number of the column, from 1.
 * @returns Name, format and the like.
 */
export function readColumnTexts(header: FitsHeader, number: number): ColumnTexts {
  return {
    name: header.string(`TTYPE${number}`)?.trim() ?? "",
    number,
    format: header.string(`TFORM${number}`)?.trim() ?? "",
    unit: header.string(`TUNIT${number}`)?.trim() || null,
    description: header.comment(`TTYPE${number}`),
    display: header.string(`TDISP${number}`)?.trim() || null,
  };
}

/**
 * Reads scaling keywords of a column or image.
 *
 * @param header The header.
 * @param keys Keywords of scale, zero point and missing value.
 * @returns The scaling.
 * @throws {InputError} If one of them is no number.
 */
export function readScaling(
  header: FitsHeader,
  keys: readonly [scale: string, zero: string, blank: string],
): Scaling {
  const blank = header.value(keys[2]);
  return {
    scale: header.number(keys[0]) ?? 1,
    zero: header.number(keys[1]) ?? 0,
    blank: typeof blank === "number" || typeof blank === "bigint" ? blank : null,
  };
}
