import { stringify } from "@std/yaml";
import { InputError } from "../errors.ts";
import type { EcsvColumn, EcsvTable, EcsvValue } from "./ecsv_table.ts";

/** Options of {@linkcode formatEcsv}. */
export interface FormatEcsvOptions {
  /**
   * Character between cells, a comma or a blank.
   * @default {","}
   */
  readonly delimiter?: "," | " ";
}

function formatFloat(value: number, single: boolean): string {
  if (Number.isNaN(value)) return "nan";
  if (!Number.isFinite(value)) return value > 0 ? "inf" : "-inf";
  if (Object.is(value, -0)) return "-0.0";
  if (single) {
    for (let digits = 6; digits < 9; digits++) {
      const short = Number(value.toPrecision(digits));
      if (Math.fround(short) === Math.fround(value)) return String(short);
    }
  }
  return Number.isInteger(value) && Math.abs(value) < 1e15 ? `${value}.0` : String(value);
}

function formatValue(column: EcsvColumn, row: number): string {
  const value: EcsvValue | undefined = column.values[row];
  const { name, datatype, subtype } = column;
  if (value === null || value === undefined) return "";
  const is = typeof value;
  if (subtype !== undefined && (Array.isArray(value) || subtype === "json")) {
    return JSON.stringify(value);
  }
  if (subtype === undefined && datatype === "string" && is === "string") return value as string;
  if (subtype === undefined && datatype === "bool" && is === "boolean") {
    return value ? "True" : "False";
  }
  if (/^u?int/.test(datatype) && (is === "bigint" || Number.isSafeInteger(value))) {
    return String(value);
  }
  if (datatype.startsWith("float") && is === "number") {
    return formatFloat(value as number, datatype === "float32");
  }
  throw new InputError({
    action: "write ECSV table",
    rule: `a value of this column must be of datatype ${subtype ?? datatype} or null`,
    value: is === "bigint" ? String(value) : value,
    key: name,
  });
}

function quote(cell: string, delimiter: string): string {
  const must = (cell === "" && delimiter === " ") || cell.includes(delimiter) ||
    /["\r\n]|^#|^\s|\s$/.test(cell);
  return must ? `"${cell.replaceAll('"', '""')}"` : cell;
}

function header(table: EcsvTable, delimiter: string): string[] {
  const datatype = table.columns.map((
    { name, unit, datatype, subtype, format, description },
  ) => ({
    name,
    ...(unit === undefined ? {} : { unit }),
    datatype,
    ...(subtype === undefined ? {} : { subtype }),
    ...(format === undefined ? {} : { format }),
    ...(description === undefined ? {} : { description }),
  }));
  const document = {
    ...(delimiter === " " ? {} : { delimiter }),
    datatype,
    meta: { creator: "Millrace", ...table.meta },
    schema: "astropy-2.0",
  };
  const yaml = stringify(document, { lineWidth: -1 });
  return ["%ECSV 1.0", "---", ...yaml.trimEnd().split("\n")].map((line) => `# ${line}`);
}

/**
 * Writes a table as ECSV 1.0 text. Missing values (null) become empty cells; the format knows no
 * other mark, so an empty string is read back as missing. Floating-point numbers are written with
 * the fewest digits that give them back exactly. `meta.creator` is `Millrace` unless the table has
 * its own, which must begin so if the file is to be recognised.
 *
 * @param table The table.
 * @param options The delimiter.
 * @returns The text.
 * @throws {InputError} If columns differ in length, a name comes twice, or a value does not fit its
 * datatype.
 *
 * @example
 * ```ts
 * import { formatEcsv } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const text = formatEcsv({
 *   columns: [
 *     { name: "phase", datatype: "float64", values: [0.25, 0.5] },
 *     { name: "velocity", datatype: "float64", unit: "km / s", values: [-310.5, null] },
 *   ],
 *   meta: {},
 * });
 * assertEquals(text.split("\n").slice(-4), ["phase,velocity", "0.25,-310.5", "0.5,", ""]);
 * ```
 */
export function formatEcsv(table: EcsvTable, options: FormatEcsvOptions = {}): string {
  const { delimiter = "," } = options;
  const { columns } = table;
  const rows = columns[0]?.values.length ?? 0;
  const names = columns.map(({ name }) => name);
  columns.forEach(({ name, values }, index) => {
    if (values.length !== rows || names.indexOf(name) !== index) {
      const rule = values.length === rows
        ? "a column name must not come twice"
        : `columns must have as many values as the first one (${rows})`;
      const value = values.length === rows ? name : values.length;
      throw new InputError({ action: "write ECSV table", rule, value, key: name });
    }
  });
  const join = (cells: readonly string[]) =>
    cells.map((cell) => quote(cell, delimiter)).join(delimiter);
  const body: string[] = [];
  for (let row = 0; row < rows; row++) {
    const line = join(columns.map((column) => formatValue(column, row)));
    // An empty line would be passed over: the one cell of a one-column table is quoted instead.
    body.push(line === "" ? '""' : line);
  }
  return [...header(table, delimiter), join(names), ...body, ""].join("\n");
}
