import { parse as parseYaml } from "@std/yaml";
import { parse } from "csv-parse/sync";
import { InputError } from "../errors.ts";
import { ecsvDatatypes } from "./ecsv_table.ts";
import type { EcsvColumn, EcsvDatatype, EcsvTable, EcsvValue } from "./ecsv_table.ts";

/** Options of {@linkcode parseEcsv}. */
export interface ParseEcsvOptions {
  /** File that the text came from, for messages. */
  readonly file?: string;
}

type Refuse = (rule: string, rest?: Partial<InputErrorPlace>) => InputError;
interface InputErrorPlace {
  readonly value: unknown;
  readonly line: number;
  readonly key: string;
}
type Head = Omit<EcsvColumn, "values">;
interface Header {
  readonly columns: readonly Head[];
  readonly delimiter: string;
  readonly meta: Record<string, unknown>;
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === "object" && value !== null && !Array.isArray(value);

function parseHeaderYaml(text: string, refuse: Refuse): unknown {
  try {
    return parseYaml(text);
  } catch (first) {
    // Tags of other programs' own types say nothing to us; their content can still be read.
    const plain = text.replace(/(^|[\s[{,])!(?!!)[A-Za-z][\w./]*/gm, "$1");
    try {
      return parseYaml(plain);
    } catch {
      const { message } = first as Error;
      throw refuse(`the header must be YAML (${message.split("\n")[0]})`, { line: 1 });
    }
  }
}

function parseColumn(entry: unknown, refuse: Refuse): Head {
  if (!isRecord(entry) || typeof entry["name"] !== "string") {
    throw refuse("every entry of datatype in the header must have a name", {
      value: entry,
      line: 1,
    });
  }
  const { name, datatype, unit, subtype, description, format } = entry;
  if (!(ecsvDatatypes as readonly unknown[]).includes(datatype)) {
    const rule = `the datatype of a column must be one of ${ecsvDatatypes.join(", ")}`;
    throw refuse(rule, { value: datatype, line: 1, key: String(name) });
  }
  const text = (key: string, value: unknown) =>
    value === undefined || value === null ? {} : { [key]: String(value) };
  return {
    name: String(name),
    datatype: datatype as EcsvDatatype,
    ...text("unit", unit),
    ...text("subtype", subtype),
    ...text("description", description),
    ...text("format", format),
  };
}

function parseHeader(lines: readonly string[], refuse: Refuse): Header {
  if (!/^# *%ECSV 1\.\d/.test(lines[0] ?? "")) {
    throw refuse("the first line must be # %ECSV 1.0", { value: lines[0] ?? "", line: 1 });
  }
  const yaml = lines.slice(1).map((line) => line.replace(/^# ?/, "")).join("\n");
  const document = parseHeaderYaml(yaml, refuse);
  const entries = isRecord(document) ? document["datatype"] : undefined;
  if (!isRecord(document) || !Array.isArray(entries)) {
    throw refuse("the header must have a list named datatype, one entry a column", { line: 1 });
  }
  const delimiter = document["delimiter"] ?? " ";
  if (delimiter !== " " && delimiter !== ",") {
    throw refuse("the delimiter must be a comma or a blank", { value: delimiter, line: 1 });
  }
  // Ordered maps are written as a list of maps with one key each.
  const meta = Array.isArray(document["meta"])
    ? Object.assign({}, ...document["meta"].filter(isRecord))
    : document["meta"];
  return {
    columns: entries.map((entry) => parseColumn(entry, refuse)),
    delimiter,
    meta: isRecord(meta) ? meta : {},
  };
}

const BLANK = Symbol("blank between two delimiters");

function parseRows(text: string, delimiter: string, refuse: Refuse) {
  try {
    const found = parse(text, {
      // Blanks may come in a row; an empty cell is then written as a pair of quotes.
      cast: (value, { quoting }) => delimiter === " " && value === "" && !quoting ? BLANK : value,
      comment: "#",
      comment_no_infix: true,
      delimiter,
      info: true,
      relax_column_count: true,
      skip_empty_lines: true,
    }) as unknown as { record: (string | symbol)[]; info: { lines: number } }[];
    return found.map(({ record, info }) => ({
      line: info.lines,
      cells: record.filter((cell): cell is string => cell !== BLANK),
    }));
  } catch (error) {
    const { message, lines } = error as Error & { lines?: number };
    throw refuse(`quotes must stand as CSV wants (${message})`, { line: lines });
  }
}

function parseInteger(cell: string): number | bigint | undefined {
  if (!/^[+-]?\d+$/.test(cell)) return undefined;
  const value = Number(cell);
  return Number.isSafeInteger(value) ? value : BigInt(cell.replace(/^\+/, ""));
}

function parseFloatCell(cell: string): number | undefined {
  if (/^[+-]?nan$/i.test(cell)) return NaN;
  if (/^[+-]?inf(?:inity)?$/i.test(cell)) return cell.startsWith("-") ? -Infinity : Infinity;
  return /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/.test(cell) ? Number(cell) : undefined;
}

function parseCell({ datatype, subtype }: Head, cell: string): EcsvValue | undefined {
  if (cell === "") return null;
  if (subtype !== undefined) {
    try {
      return JSON.parse(cell.replace(/\bNaN\b/g, "null")) as EcsvValue;
    } catch {
      return undefined;
    }
  }
  if (datatype === "string") return cell;
  if (datatype === "bool") return cell === "True" ? true : cell === "False" ? false : undefined;
  return datatype.startsWith("float") ? parseFloatCell(cell) : parseInteger(cell);
}

/**
 * Reads ECSV 1.0 text: datatypes, units, descriptions, missing values (null, also for an empty
 * string, which the format cannot tell from a missing one), array cells and whatever `meta` holds.
 *
 * @param text The text.
 * @param options File name for messages.
 * @returns The table.
 * @throws {InputError} If the header or a cell is not as the format wants; with file, line and
 * column name.
 *
 * @example
 * ```ts
 * import { parseEcsv } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const text = [
 *   "# %ECSV 1.0",
 *   "# ---",
 *   "# datatype:",
 *   "# - {name: velocity, unit: km / s, datatype: float64}",
 *   "velocity",
 *   "-310.5",
 *   '""',
 * ].join("\n");
 * const { columns } = parseEcsv(text);
 * assertEquals(columns[0]?.unit, "km / s");
 * assertEquals(columns[0]?.values, [-310.5, null]);
 * ```
 */
export function parseEcsv(text: string, options: ParseEcsvOptions = {}): EcsvTable {
  const refuse: Refuse = (rule, rest = {}) =>
    new InputError({ action: "read ECSV table", rule, file: options.file, ...rest });
  const lines = text.replace(/^\uFEFF/, "").split(/\r?\n/);
  const end = lines.findIndex((line) => !line.startsWith("#"));
  const { columns, delimiter, meta } = parseHeader(
    end < 0 ? lines : lines.slice(0, Math.max(end, 1)),
    refuse,
  );
  // Comment lines in place of the header keep the line numbers of what follows.
  const body = [...lines.slice(0, end).map(() => "#"), ...lines.slice(end)].join("\n");
  const [first, ...rows] = end < 0 ? [] : parseRows(body, delimiter, refuse);
  const names = columns.map(({ name }) => name);
  if (first === undefined || first.cells.join("\n") !== names.join("\n")) {
    throw refuse(`the row of names must agree with the header (${names.join(", ")})`, {
      value: first?.cells.join(", ") ?? "",
      line: first?.line ?? lines.length,
    });
  }
  const values = columns.map((): EcsvValue[] => []);
  for (const { line, cells } of rows) {
    if (cells.length !== columns.length) {
      throw refuse(`a row must have ${columns.length} cells`, { value: cells.length, line });
    }
    columns.forEach((column, index) => {
      const cell = cells[index] ?? "";
      const value = parseCell(column, cell);
      if (value === undefined) {
        const { subtype, datatype, name } = column;
        const rule = `a cell of this column must be ${subtype ?? datatype}`;
        throw refuse(rule, { value: cell, line, key: name });
      }
      values[index]?.push(value);
    });
  }
  return {
    columns: columns.map((head, index) => ({ ...head, values: values[index] ?? [] })),
    meta,
  };
}
