import { type CsvError, parse } from "csv-parse/sync";
import { InputError } from "../errors.ts";

/** A table read from comma-separated text; every cell is still text. */
export interface CsvTable {
  /** File it came from, for messages. */
  readonly file?: string;
  /** Column names, in the order of the file. */
  readonly names: readonly string[];
  /** Rows, in the order of the file. */
  readonly rows: readonly CsvRow[];
}

/** One row of a {@linkcode CsvTable}. */
export interface CsvRow {
  /** Line of the file where the row begins, from 1. */
  readonly line: number;
  /** Cells, one per column, without blanks around them. */
  readonly cells: readonly string[];
}

/** Options of {@linkcode parseCsv}. */
export interface CsvOptions {
  /** File that the text came from, for messages. */
  readonly file?: string;
  /**
   * What is being done, for messages.
   * @default {"read CSV table"}
   */
  readonly action?: string;
  /**
   * Character between cells.
   * @default {","}
   */
  readonly delimiter?: string;
}

/** A record with its place. */
interface Record {
  /** The cells. */
  readonly record: string[];
  /** What the parser counts. */
  readonly info: { readonly lines: number };
}

const newlines = (cells: readonly string[]) => cells.join("").split("\n").length - 1;

function records(text: string, options: CsvOptions): CsvRow[] {
  const { file, action = "read CSV table", delimiter = "," } = options;
  try {
    const found = parse(text, {
      bom: true,
      comment: "#",
      comment_no_infix: true,
      delimiter,
      info: true,
      relax_column_count: true,
      skip_empty_lines: true,
      trim: true,
    }) as unknown as Record[];
    return found.map(({ record, info }) => ({
      line: info.lines - newlines(record),
      cells: record,
    }));
  } catch (error) {
    const { code, lines, message } = error as CsvError & { lines?: number };
    const unclosed = code === "CSV_QUOTE_NOT_CLOSED";
    throw new InputError({
      action,
      rule: unclosed
        ? "a quoted cell must be closed"
        : `quotes must stand as CSV wants (${message})`,
      file,
      line: lines,
      remedy: 'put quotes around the whole cell and double those within it: "a ""b"" c"',
    });
  }
}

/**
 * Reads comma-separated text (RFC 4180) with column names in its first row. Empty lines and lines
 * that begin with `#` are passed over; blanks around a cell are dropped.
 *
 * @param text The text.
 * @param options File name for messages, and the delimiter.
 * @returns Names and rows.
 * @throws {InputError} If there is no row of names, a name is empty or comes twice, a row has
 * another number of cells than there are names, or a quote is not closed; with file and line.
 *
 * @example
 * ```ts
 * import { parseCsv } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const table = parseCsv("file,exposure_s\nr001.txt,120\n# clouds\nr002.txt,60\n");
 * assertEquals(table.names, ["file", "exposure_s"]);
 * assertEquals(table.rows[1], { line: 4, cells: ["r002.txt", "60"] });
 * ```
 */
export function parseCsv(text: string, options: CsvOptions = {}): CsvTable {
  const { file, action = "read CSV table" } = options;
  const [first, ...rows] = records(text, options);
  if (first === undefined) {
    throw new InputError({
      action,
      rule: "the first row must hold the names of the columns and there is none",
      file,
      remedy: "write a row such as file,mid,exposure_s at the top",
    });
  }
  const names = first.cells;
  names.forEach((name, index) => {
    if (name === "" || names.indexOf(name) !== index) {
      throw new InputError({
        action,
        rule: name === "" ? "a column must have a name" : "a column name must not come twice",
        value: name === "" ? index + 1 : name,
        unit: name === "" ? "(number of the column)" : undefined,
        file,
        line: first.line,
      });
    }
  });
  for (const { line, cells } of rows) {
    if (cells.length !== names.length) {
      throw new InputError({
        action,
        rule: `every row must have as many cells as there are names (${names.length})`,
        value: cells.length,
        unit: "cells",
        file,
        line,
        remedy: "put a cell that holds the delimiter in quotes",
      });
    }
  }
  return { ...(file === undefined ? {} : { file }), names, rows };
}
