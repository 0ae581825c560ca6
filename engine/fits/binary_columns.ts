import type { ColumnHead } from "./column.ts";
import { readColumnTexts, readScaling } from "./column_texts.ts";
import { UNSCALED } from "./decode_numbers.ts";
import type { Scaling } from "./decode_numbers.ts";
import { fitsError } from "./fits_error.ts";
import type { FitsHeader } from "./header.ts";
import type { Source } from "./source.ts";
import { readCount } from "./structure.ts";
import { cellBytes, parseTableForm } from "./table_form.ts";
import type { TableForm } from "./table_form.ts";

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
