import type { ColumnHead, FitsColumn } from "./column.ts";
import { readColumnTexts, readScaling } from "./column_texts.ts";
import type { Scaling } from "./decode_numbers.ts";
import { fitsError } from "./fits_error.ts";
import type { FitsHeader } from "./header.ts";
import { checkDecodedSize } from "./source.ts";
import type { Source } from "./source.ts";
import { readCount } from "./structure.ts";

/** A column of an ASCII table and where its fields are. */
export interface AsciiColumn {
  /** What the header says. */
  readonly head: ColumnHead;
  /** A for text, otherwise a number. */
  readonly letter: "A" | "I" | "F" | "E" | "D";
  /** First byte within a row. */
  readonly start: number;
  /** Bytes of a field. */
  readonly bytes: number;
  /** Digits after a decimal point that is left out. */
  readonly decimals: number;
  /** Scale and zero point. */
  readonly scaling: Scaling;
  /** Text of a missing value. */
  readonly blank: string | null;
}

const latin1 = new TextDecoder("latin1");

/**
 * Reads the layout of an ASCII table's rows (FITS 4.0, 7.2).
 *
 * @param header The header.
 * @param source File and HDU, for messages.
 * @returns The columns.
 * @throws {InputError} If a format is wrong or a field lies outside the row.
 */
export function readAsciiColumns(header: FitsHeader, source: Source): AsciiColumn[] {
  const row = readCount(header, "NAXIS1", { place: source });
  const fields = readCount(header, "TFIELDS", { place: source });
  if (fields > 999) {
    const parts = { key: "TFIELDS", value: fields };
    throw fitsError(source, "a table must have at most 999 columns", parts);
  }
  return Array.from({ length: fields }, (_, k): AsciiColumn => {
    const number = k + 1;
    const key = `TFORM${number}`;
    const format = header.string(key) ?? "";
    const match = /^\s*([AIFED])(\d{1,9})(?:\.(\d{1,9}))?(?:E\d+)?\s*$/.exec(format.toUpperCase());
    const start = readCount(header, `TBCOL${number}`, { place: source }) - 1;
    const bytes = Number(match?.[2] ?? 0);
    if (match === null || start < 0 || start + bytes > row) {
      const rule =
        "a field of an ASCII table must have a format such as A8 or F8.3 and lie in its row";
      const card = header.card(key);
      throw fitsError(source, rule, {
        key,
        value: `${format} from character ${start + 1} of ${row}`,
        ...(card === undefined ? {} : { offset: card.offset }),
      });
    }
    return {
      head: { ...readColumnTexts(header, number), width: 1, shape: [] },
      letter: match[1] as AsciiColumn["letter"],
      start,
      bytes,
      decimals: Number(match[3] ?? 0),
      scaling: readScaling(header, [`TSCAL${number}`, `TZERO${number}`, ""]),
      blank: header.string(`TNULL${number}`)?.trimEnd() ?? null,
    };
  });
}

// Fortran's rules: D for E, the E left out before a sign, a decimal point left out, blank for zero.
function parseAsciiNumber(text: string, column: AsciiColumn): number | undefined {
  const field = text.trim();
  if (field === "") return 0;
  const match = /^([+-]?\d*)(\.\d*)?(?:([EDed]?[+-]\d+)|[EDed](\d+))?$/.exec(field);
  if (match === null || !/\d/.test((match[1] ?? "") + (match[2] ?? ""))) return undefined;
  const [, whole = "", fraction, signed, plain] = match;
  if (column.letter === "I" && (fraction ?? signed ?? plain) !== undefined) return undefined;
  const exponent = Number(plain ?? signed?.replace(/^[EDed]/, "") ?? 0);
  const implied = fraction === undefined && column.letter !== "I" ? column.decimals : 0;
  const value = Number(`${whole}${fraction ?? ""}e${exponent - implied}`);
  return Number.isFinite(value) ? value : undefined;
}

/**
 * Decodes one column of an ASCII table.
 *
 * @param header The header.
 * @param source The table's data.
 * @param column The column.
 * @returns Its values: texts, or doubles with NaN where missing.
 * @throws {InputError} If a field is no number.
 */
export function decodeAsciiColumn(
  header: FitsHeader,
  source: Source,
  column: AsciiColumn,
): FitsColumn {
  const { head, start, bytes: length, letter, blank, scaling } = column;
  const row = readCount(header, "NAXIS1", { place: source });
  const rows = row === 0 ? 0 : readCount(header, "NAXIS2", { place: source });
  checkDecodedSize(source, rows * (length + 16), head.name);
  const field = (r: number) =>
    latin1.decode(source.bytes.subarray(r * row + start, r * row + start + length));
  if (letter === "A") {
    const data = Array.from({ length: rows }, (_, r) => field(r).trimEnd());
    return { ...head, rows, kind: "text", data };
  }
  const data = new Float64Array(rows);
  let missing: Uint8Array | null = null;
  for (let r = 0; r < rows; r++) {
    const text = field(r);
    if (blank !== null && text.trimEnd() === blank) {
      (missing ??= new Uint8Array(rows))[r] = 1;
      data[r] = NaN;
      continue;
    }
    const value = parseAsciiNumber(text, column);
    if (value === undefined) {
      throw fitsError(source, `a field of this column must be a number of format ${head.format}`, {
        key: head.name || `column ${head.number}`,
        value: text,
        offset: source.offset + r * row + start,
      });
    }
    data[r] = scaling.zero + scaling.scale * value;
  }
  return { ...head, rows, kind: "number", data, missing };
}
