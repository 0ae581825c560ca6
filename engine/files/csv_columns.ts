import { closestString } from "@std/text";
import { InputError } from "../errors.ts";
import type { CsvTable } from "./csv.ts";

/** Options of {@linkcode csvNumbers}. */
export interface CsvNumbersOptions {
  /**
   * Whether an empty cell is NaN instead of an error.
   * @default {false}
   */
  readonly allow_empty?: boolean;
}

const NUMBER = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;

function indexOf(table: CsvTable, name: string): number {
  const index = table.names.indexOf(name);
  if (index < 0) {
    const nearest = table.names.length === 0 ? "" : closestString(name, table.names);
    throw new InputError({
      action: "read CSV table",
      rule: `a column of that name must be there: the columns are ${table.names.join(", ")}`,
      value: name,
      file: table.file,
      remedy: `rename the column, or say which one is meant (nearest: ${nearest})`,
    });
  }
  return index;
}

/**
 * A column of a CSV table, as text.
 *
 * @param table The table.
 * @param name Name of the column.
 * @returns Its cells, one per row.
 * @throws {InputError} If there is no such column, naming the nearest.
 *
 * @example
 * ```ts
 * import { csvTexts, parseCsv } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(csvTexts(parseCsv("file,s\na.txt,1\nb.txt,2\n"), "file"), ["a.txt", "b.txt"]);
 * ```
 */
export function csvTexts(table: CsvTable, name: string): string[] {
  const index = indexOf(table, name);
  return table.rows.map(({ cells }) => cells[index] ?? "");
}

/**
 * A column of a CSV table, as numbers.
 *
 * @param table The table.
 * @param name Name of the column.
 * @param options Whether empty cells are allowed.
 * @returns Its values, one per row.
 * @throws {InputError} If there is no such column, or a cell is not a finite decimal number; with
 * file, line and column name.
 *
 * @example
 * ```ts
 * import { csvNumbers, parseCsv } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const table = parseCsv("file,s\na.txt,1.5\nb.txt,2e3\n");
 * assertEquals(csvNumbers(table, "s"), new Float64Array([1.5, 2000]));
 * ```
 */
export function csvNumbers(
  table: CsvTable,
  name: string,
  options: CsvNumbersOptions = {},
): Float64Array {
  const { allow_empty = false } = options;
  const index = indexOf(table, name);
  return Float64Array.from(table.rows, ({ line, cells }) => {
    const cell = cells[index] ?? "";
    if (cell === "" && allow_empty) return NaN;
    const value = NUMBER.test(cell) ? Number(cell) : NaN;
    if (!Number.isFinite(value)) {
      throw new InputError({
        action: "read CSV table",
        rule: "a cell of this column must be a finite decimal number",
        value: cell,
        file: table.file,
        line,
        key: name,
      });
    }
    return value;
  });
}
