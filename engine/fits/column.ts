import type { FitsValues } from "./values.ts";

/** What the header says of a table's column. */
export interface ColumnHead {
  /** Name (TTYPEn), empty when it has none. */
  readonly name: string;
  /** Number, from 1. */
  readonly number: number;
  /** Format (TFORMn) as written. */
  readonly format: string;
  /** Unit (TUNITn). */
  readonly unit: string | null;
  /** What the column holds: the comment of TTYPEn. */
  readonly description: string;
  /** How it likes to be shown (TDISPn). */
  readonly display: string | null;
  /** Values in each cell; of strings their number, not their length. 0 for arrays of varying length. */
  readonly width: number;
  /** Lengths of a cell's axes (TDIMn), first axis fastest; empty for a single value. */
  readonly shape: readonly number[];
}

/**
 * A decoded column: rows × width values, row by row. What else there is depends on `kind`.
 *
 * @example Telling the kinds apart
 * ```ts
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assert, assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "table",
 *   columns: [{ name: "ID", data: new BigInt64Array([9007199254740993n]) }],
 * }]);
 * const column = parseFits(bytes).hdus[1]!.column("id");
 * assert(column.kind === "number");
 * assertEquals(column.data[0], 9007199254740993n);
 * ```
 */
export type FitsColumn = ColumnHead & FitsValues & {
  /** Number of rows. */
  readonly rows: number;
};
