import type { ColumnHead, FitsColumn } from "./column.ts";
import { UNSCALED } from "./decode_numbers.ts";
import type { Scaling } from "./decode_numbers.ts";
import { decodeValues } from "./decode_values.ts";
import type { Layout } from "./decode_values.ts";
import { fitsError } from "./fits_error.ts";
import type { FitsHeader } from "./header.ts";
import { checkDecodedSize } from "./source.ts";
import type { Source } from "./source.ts";
import { readCount } from "./structure.ts";
import { bytesOf, cellBytes, parseTableForm } from "./table_form.ts";
import type { TableForm } from "./table_form.ts";
import type { FixedValues } from "./values.ts";

/** A column of a binary table and where its cells are. */
export interface BinaryColumn {
  /** What the header says. */
  readonly head: ColumnHead;
  /** Its format. */
  readonly form: TableForm;
  /** First byte within a row. */
  readonly start: number;
  /** Length of each string; 0 for other types. */
  readonly string_length: number;
  /** Scaling and missing value. */
  readonly scaling: Scaling;
}

/** Names, units and the like, which ASCII and binary tables write alike. */
export type ColumnTexts = Pick<
  ColumnHead,
  "name" | "number" | "format" | "unit" | "description" | "display"
>;

// What a cell of varying length costs besides its values: the objects around them.
const CELL_BYTES = 200;
// What a string costs besides its letters.
const STRING_BYTES = 16;

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

function parseDim(text: string | undefined, elements: number): number[] | null {
  const match = /^\s*\(([\d\s,]{1,200})\)\s*$/.exec(text ?? "");
  const axes = match?.[1]?.split(",").map(Number) ?? [];
  if (axes.length === 0 || axes.some((axis) => !Number.isSafeInteger(axis))) return null;
  return axes.reduce((product, axis) => product * axis, 1) === elements ? axes : null;
}

// TDIMn that does not agree with TFORMn says nothing: the cell is then taken as one row of values.
function readShape(form: TableForm, dim: string | undefined) {
  const { letter, repeat, descriptor } = form;
  if (descriptor !== 0) return { shape: [], width: 0, string_length: 0 };
  const axes = parseDim(dim, repeat);
  if (letter !== "A") {
    const shape = axes ?? (repeat === 1 ? [] : [repeat]);
    return { shape, width: repeat, string_length: 0 };
  }
  const given = form.string_length;
  const string_length = axes?.[0] ?? (given > 0 && given <= repeat ? given : repeat);
  const width = string_length === 0 ? 1 : Math.floor(repeat / string_length);
  const shape = axes?.slice(1) ?? (width === 1 ? [] : [width]);
  return { shape, width, string_length };
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

/**
 * Reads the layout of a binary table's rows.
 *
 * @param header The header.
 * @param source File and HDU, for messages.
 * @returns The columns.
 * @throws {InputError} If a format is wrong or the formats do not fill the row.
 */
export function readBinaryColumns(header: FitsHeader, source: Source): BinaryColumn[] {
  const row = readCount(header, "NAXIS1", { place: source });
  const fields = readCount(header, "TFIELDS", { place: source });
  if (fields > 999) {
    const parts = { key: "TFIELDS", value: fields };
    throw fitsError(source, "a table must have at most 999 columns", parts);
  }
  let start = 0;
  const columns = Array.from({ length: fields }, (_, k): BinaryColumn => {
    const number = k + 1;
    const key = `TFORM${number}`;
    const parts = { key, offset: header.card(key)?.offset ?? header.card("TFIELDS")?.offset ?? 0 };
    const form = parseTableForm(header.string(key) ?? "", parts, source);
    const { shape, width, string_length } = readShape(form, header.string(`TDIM${number}`));
    const numeric = /[BIJKED]/.test(form.letter);
    const column = {
      head: { ...readColumnTexts(header, number), width, shape },
      form,
      start,
      string_length,
      scaling: numeric
        ? readScaling(header, [`TSCAL${number}`, `TZERO${number}`, `TNULL${number}`])
        : UNSCALED,
    };
    start += cellBytes(form);
    return column;
  });
  if (start !== row) {
    const rule = `the column formats must fill the row of NAXIS1 bytes, and they take ${start}`;
    const card = header.card("NAXIS1");
    throw fitsError(source, rule, {
      key: "NAXIS1",
      value: row,
      ...(card === undefined ? {} : { offset: card.offset }),
    });
  }
  return columns;
}

function gather(bytes: Uint8Array, rows: number, at: { row: number; start: number; cell: number }) {
  const { row, start, cell } = at;
  if (cell === row) return bytes.subarray(0, rows * row);
  const out = new Uint8Array(rows * cell);
  for (let r = 0; r < rows; r++) {
    const from = r * row + start;
    // A loop is quicker than set() for the few bytes of a scalar.
    if (cell > 32) out.set(bytes.subarray(from, from + cell), r * cell);
    else for (let k = 0; k < cell; k++) out[r * cell + k] = bytes[from + k]!;
  }
  return out;
}

function decodedBytes({ letter, cells, repeat, string_length }: Layout): number {
  const values = cells * repeat;
  if (letter === "A") {
    return values + STRING_BYTES * (string_length === 0 ? cells : values / string_length);
  }
  return values * (letter === "M" ? 16 : 8);
}

/** Sizes of a binary table. */
interface Sizes {
  /** Number of rows. */
  readonly rows: number;
  /** Bytes of a row. */
  readonly row: number;
  /** First byte of the heap within the data. */
  readonly heap: number;
}

function decodeHeap(source: Source, column: BinaryColumn, sizes: Sizes): FixedValues[] {
  const { bytes } = source;
  const { form, scaling, head, start } = column;
  const { rows, row, heap } = sizes;
  const key = head.name || `column ${head.number}`;
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let total = rows * CELL_BYTES;
  checkDecodedSize(source, total, key);
  return Array.from({ length: rows }, (_, r) => {
    const at = r * row + start;
    const present = form.repeat === 1;
    const wide = form.descriptor === 16;
    const count = !present ? 0 : wide ? Number(view.getBigInt64(at)) : view.getUint32(at);
    const from = !present || count === 0
      ? 0
      : wide
      ? Number(view.getBigInt64(at + 8))
      : view.getUint32(at + 4);
    const length = bytesOf(form.letter, count);
    if (count !== 0 && !(count > 0 && from >= 0 && heap + from + length <= bytes.length)) {
      throw fitsError(source, "an array of varying length must lie within the heap", {
        key,
        value: `${count} values from byte ${from} of the heap`,
        offset: source.offset + at,
      });
    }
    const layout: Layout = {
      letter: form.letter,
      cells: 1,
      repeat: count,
      string_length: form.letter === "A" ? count : 0,
      scaling,
    };
    // Rows may share their values, so the sum can exceed the file.
    total += decodedBytes(layout);
    checkDecodedSize(source, total, key);
    return decodeValues(bytes.subarray(heap + from, heap + from + length), layout);
  });
}

/**
 * Decodes one column of a binary table.
 *
 * @param header The header.
 * @param source The table's data.
 * @param column The column.
 * @returns Its values.
 * @throws {InputError} If it is too large or an array lies outside the heap.
 */
export function decodeBinaryColumn(
  header: FitsHeader,
  source: Source,
  column: BinaryColumn,
): FitsColumn {
  const { head, form, start, string_length, scaling } = column;
  const row = readCount(header, "NAXIS1", { place: source });
  const rows = readCount(header, "NAXIS2", { place: source });
  if (row === 0 && rows > 100_000) {
    const rule = "a table whose rows have no bytes must have at most 100000 rows";
    throw fitsError(source, rule, { key: "NAXIS2", value: rows });
  }
  if (form.descriptor !== 0) {
    const heap = readCount(header, "THEAP", { place: source, missing: row * rows });
    const cells = decodeHeap(source, column, { rows, row, heap });
    return { ...head, rows, kind: "variable", cells };
  }
  const layout = { letter: form.letter, cells: rows, repeat: form.repeat, string_length, scaling };
  checkDecodedSize(source, decodedBytes(layout), head.name || `column ${head.number}`);
  const cell = cellBytes(form);
  return {
    ...head,
    rows,
    ...decodeValues(gather(source.bytes, rows, { row, start, cell }), layout),
  };
}
