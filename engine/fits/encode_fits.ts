import { InputError } from "../errors.ts";
import { checkSpecs } from "./check_spec.ts";
import { encodeChecksum, onesComplementSum } from "./checksum.ts";
import { encodeCard } from "./encode_card.ts";
import { encodeColumn } from "./encode_column.ts";
import { encodeNumbers, storedBlank } from "./encode_numbers.ts";
import type { CardSpec, HduSpec, ImageSpec, TableSpec } from "./hdu_spec.ts";
import { BLOCK, CARD } from "./parse_header.ts";

const action = "write FITS file";

/** Data of an HDU and the cards that describe them. */
interface Unit {
  readonly data: Uint8Array;
  readonly mandatory: readonly CardSpec[];
  readonly further: readonly CardSpec[];
}

const BITPIX = { B: 8, I: 16, J: 32, K: 64, E: -32, D: -64 } as const;

const card = (keyword: string, value: CardSpec["value"], comment?: string): CardSpec => ({
  keyword,
  value,
  ...(comment === undefined ? {} : { comment }),
});

function encodeImage({ shape, data, unit, blank }: ImageSpec): Unit {
  const elements = shape.length === 0 ? 0 : shape.reduce((product, n) => product * n, 1);
  if ((data?.length ?? 0) !== elements) {
    throw new InputError({
      action,
      rule: `an image must have as many values as its shape says (${elements})`,
      value: data?.length ?? 0,
      unit: "values",
    });
  }
  const encoded = encodeNumbers(data ?? new Uint8Array());
  const { bytes, letter, zero } = encoded;
  return {
    data: bytes,
    mandatory: [
      card("BITPIX", BITPIX[letter], "bits of each value"),
      card("NAXIS", shape.length, "number of axes"),
      ...shape.map((length, k) => card(`NAXIS${k + 1}`, length, `length of axis ${k + 1}`)),
    ],
    further: [
      ...(zero === 0
        ? []
        : [card("BSCALE", 1), card("BZERO", zero, "unsigned or signed integers")]),
      ...(blank === undefined
        ? []
        : [card("BLANK", storedBlank(blank, encoded, "BLANK"), "stored value of missing data")]),
      ...(unit === undefined ? [] : [card("BUNIT", unit, "unit of the values")]),
    ],
  };
}

function encodeTable({ columns }: TableSpec): Unit {
  const encoded = columns.map((column, k) => encodeColumn(column, k + 1));
  const rows = encoded[0]?.rows ?? 0;
  encoded.forEach((column, k) => {
    if (column.rows !== rows) {
      const rule = `columns must have as many rows as the first one (${rows})`;
      const key = columns[k]?.name;
      throw new InputError({ action, rule, value: column.rows, ...(key ? { key } : {}) });
    }
  });
  const row = encoded.reduce((sum, { cell }) => sum + cell, 0);
  const data = new Uint8Array(rows * row);
  let start = 0;
  for (const { bytes, cell } of encoded) {
    for (let r = 0; r < rows; r++) {
      const to = r * row + start;
      // A loop is quicker than set() for the few bytes of a scalar.
      if (cell > 32) data.set(bytes.subarray(r * cell, (r + 1) * cell), to);
      else for (let k = 0; k < cell; k++) data[to + k] = bytes[r * cell + k]!;
    }
    start += cell;
  }
  return {
    data,
    mandatory: [
      card("BITPIX", 8, "bits of each value"),
      card("NAXIS", 2, "number of axes"),
      card("NAXIS1", row, "bytes of a row"),
      card("NAXIS2", rows, "number of rows"),
      card("PCOUNT", 0, "no bytes after the rows"),
      card("GCOUNT", 1, "one group"),
      card("TFIELDS", columns.length, "number of columns"),
    ],
    further: encoded.flatMap((column) => column.cards),
  };
}

function encodeHeader(cards: readonly CardSpec[]): Uint8Array {
  const records = [...cards.flatMap(encodeCard), "END".padEnd(CARD)].join("");
  return new TextEncoder().encode(records.padEnd(Math.ceil(records.length / BLOCK) * BLOCK));
}

function fill(data: Uint8Array): Uint8Array {
  const full = new Uint8Array(Math.ceil(data.length / BLOCK) * BLOCK);
  full.set(data);
  return full;
}

/** Place of an HDU in the file. */
interface HduPlace {
  readonly primary: boolean;
  readonly last: boolean;
}

function encodeHdu(spec: HduSpec, { primary, last }: HduPlace): Uint8Array[] {
  const unit = spec.kind === "image" ? encodeImage(spec) : encodeTable(spec);
  const data = fill(unit.data);
  const dataSum = onesComplementSum(data);
  const extension = spec.kind === "image" ? "IMAGE" : "BINTABLE";
  const given = spec.cards ?? [];
  const hasCreator = given.some(({ keyword }) => keyword.toUpperCase() === "CREATOR");
  const cards: CardSpec[] = [
    primary
      ? card("SIMPLE", true, "FITS Standard 4.0")
      : card("XTENSION", extension, spec.kind === "image" ? "image" : "binary table"),
    ...unit.mandatory,
    ...(primary || spec.kind === "table"
      ? []
      : [card("PCOUNT", 0, "no parameters"), card("GCOUNT", 1, "one group")]),
    ...(primary && !last ? [card("EXTEND", true, "extensions follow")] : []),
    ...(spec.name === undefined ? [] : [card("EXTNAME", spec.name, "name of this HDU")]),
    ...(spec.version === undefined ? [] : [card("EXTVER", spec.version, "version of this HDU")]),
    ...unit.further,
    ...(primary && !hasCreator
      ? [card("CREATOR", "Millrace", "program that wrote this file")]
      : []),
    ...given,
    card("DATASUM", String(dataSum), "sum of the data"),
  ];
  if (cards.some((each) => encodeCard(each).some((record) => record.startsWith("CONTINUE")))) {
    cards.push(card("LONGSTRN", "OGIP 1.0", "strings may be continued"));
  }
  const withSum = (text: string) =>
    encodeHeader([...cards, card("CHECKSUM", text, "sum of this HDU")]);
  const sum = onesComplementSum(withSum("0".repeat(16)), dataSum);
  return [withSum(encodeChecksum(sum)), data];
}

/**
 * Writes a FITS file (FITS Standard 4.0, 2018). When the first HDU is a table, an empty primary HDU
 * is put before it. The primary header gets `CREATOR = 'Millrace'` unless its cards have another
 * one; every HDU gets CHECKSUM and DATASUM. No date is written: the same input gives the same bytes.
 *
 * @param hdus What to write, in order.
 * @returns The bytes of the file.
 * @throws {InputError} If shapes and numbers of values do not agree, a name or keyword cannot be
 * written or comes twice, or a number in a header is not finite.
 *
 * @example
 * ```ts
 * import { encodeFits, findHdu, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "table",
 *   name: "EXPOSURES",
 *   columns: [
 *     { name: "PHASE", data: new Float64Array([0.1, 0.6]) },
 *     { name: "FLUX", data: new Float32Array([1, 2, 3, 4, 5, 6]), shape: [3], unit: "mJy" },
 *     { name: "SOURCE", data: ["night 1", "night 2"] },
 *   ],
 * }]);
 * const table = findHdu(parseFits(bytes), "EXPOSURES");
 * assertEquals(table.numbers("FLUX", { row: 1 }), new Float64Array([4, 5, 6]));
 * assertEquals(table.texts("SOURCE"), ["night 1", "night 2"]);
 * ```
 */
export function encodeFits(hdus: readonly HduSpec[]): Uint8Array {
  const empty: ImageSpec = { kind: "image", shape: [], data: null };
  checkSpecs(hdus);
  const all = hdus[0]?.kind === "image" ? hdus : [empty, ...hdus];
  const parts = all.flatMap((spec, k) =>
    encodeHdu(spec, { primary: k === 0, last: k === all.length - 1 })
  );
  const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    bytes.set(part, at);
    at += part.length;
  }
  return bytes;
}
