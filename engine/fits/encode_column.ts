import { InputError } from "../errors.ts";
import { toAscii } from "./encode_card.ts";
import { encodeNumbers, storedBlank } from "./encode_numbers.ts";
import type { CardSpec, ColumnSpec } from "./hdu_spec.ts";
import type { FitsNumbers } from "./values.ts";

/** A column as it is stored. */
export interface EncodedColumn {
  /** Its cells, row by row. */
  readonly bytes: Uint8Array;
  /** Number of rows. */
  readonly rows: number;
  /** Bytes of a cell. */
  readonly cell: number;
  /** The cards that describe it. */
  readonly cards: readonly CardSpec[];
}

/** What differs between the types of values. */
interface Encoded {
  readonly bytes: Uint8Array;
  readonly elements: number;
  readonly element_bytes: number;
  readonly form: (width: number) => string;
  readonly dim: readonly number[];
  readonly cards: readonly CardSpec[];
}

function encodeTexts(data: readonly string[]): Encoded {
  const texts = data.map((text) => toAscii(text).trimEnd());
  const length = texts.reduce((most, text) => Math.max(most, text.length), 1);
  const bytes = new TextEncoder().encode(texts.map((text) => text.padEnd(length, "\0")).join(""));
  const form = (width: number) => `${width * length}A`;
  return { bytes, elements: texts.length, element_bytes: length, form, dim: [length], cards: [] };
}

function encodeLogicals(data: readonly (boolean | null)[]): Encoded {
  const bytes = Uint8Array.from(data, (value) => value === null ? 0 : value ? 0x54 : 0x46);
  const form = (width: number) => `${width}L`;
  return { bytes, elements: data.length, element_bytes: 1, form, dim: [], cards: [] };
}

function encodeReals(column: ColumnSpec, data: FitsNumbers, number: number): Encoded {
  const { complex = false, null_value, name } = column;
  const encoded = encodeNumbers(data);
  const { bytes, letter, zero } = encoded;
  if (complex && letter !== "E" && letter !== "D") {
    const rule = "complex numbers must be given as Float32Array or Float64Array";
    throw new InputError({ action: "write FITS file", rule, key: name });
  }
  const cards: CardSpec[] = [];
  if (zero !== 0) {
    cards.push({ keyword: `TSCAL${number}`, value: 1 }, { keyword: `TZERO${number}`, value: zero });
  }
  if (null_value !== undefined) {
    const value = storedBlank(null_value, encoded, name);
    cards.push({ keyword: `TNULL${number}`, value });
  }
  const type = complex ? (letter === "E" ? "C" : "M") : letter;
  const parts = complex ? 2 : 1;
  const elements = data.length / parts;
  const element_bytes = data.BYTES_PER_ELEMENT * parts;
  return { bytes, elements, element_bytes, form: (width) => `${width}${type}`, dim: [], cards };
}

function encodeData(column: ColumnSpec, number: number): Encoded {
  const { data } = column;
  if (!Array.isArray(data)) return encodeReals(column, data as FitsNumbers, number);
  const isText = data.some((value) => typeof value === "string") || data.length === 0;
  return isText ? encodeTexts(data as string[]) : encodeLogicals(data as (boolean | null)[]);
}

/**
 * Encodes a column of a binary table.
 *
 * @param column The column.
 * @param number Its number, from 1.
 * @returns Bytes and cards.
 * @throws {InputError} If the number of values does not fit the shape of a cell.
 */
export function encodeColumn(column: ColumnSpec, number: number): EncodedColumn {
  const { name, shape = [], unit, display, description } = column;
  const width = shape.reduce((product, length) => product * length, 1);
  const { bytes, elements, element_bytes, form, dim, cards } = encodeData(column, number);
  const rows = elements / width;
  if (!Number.isInteger(rows) || !(width > 0)) {
    throw new InputError({
      action: "write FITS file",
      rule: `the number of values must be a multiple of those in a cell (${width})`,
      value: elements,
      key: name,
    });
  }
  const tform = form(width);
  const axes = [...dim, ...shape];
  const text = (keyword: string, value: string | undefined) =>
    value === undefined ? [] : [{ keyword: `${keyword}${number}`, value }];
  return {
    bytes,
    rows,
    cell: element_bytes * width,
    cards: [
      {
        keyword: `TTYPE${number}`,
        value: name,
        ...(description === undefined ? {} : { comment: description }),
      },
      ...text("TFORM", tform),
      ...text("TUNIT", unit),
      ...text("TDIM", shape.length + dim.length > 1 ? `(${axes.join(",")})` : undefined),
      ...text("TDISP", display),
      ...cards,
    ],
  };
}
