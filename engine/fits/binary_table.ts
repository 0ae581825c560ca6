import type { BinaryColumn } from "./binary_columns.ts";
import type { FitsColumn } from "./column.ts";
import { decodeValues } from "./decode_values.ts";
import type { Layout } from "./decode_values.ts";
import { fitsError } from "./fits_error.ts";
import type { FitsHeader } from "./header.ts";
import { checkDecodedSize } from "./source.ts";
import type { Source } from "./source.ts";
import { readCount } from "./structure.ts";
import { bytesOf, cellBytes } from "./table_form.ts";
import type { FixedValues } from "./values.ts";

// What a cell of varying length costs besides its values: the objects around them.
const CELL_BYTES = 200;
// What a string costs besides its letters.
const STRING_BYTES = 16;

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
