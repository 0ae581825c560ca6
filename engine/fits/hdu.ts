import { closestString } from "@std/text";
import { decodeAsciiColumn, readAsciiColumns } from "./ascii_table.ts";
import type { AsciiColumn } from "./ascii_table.ts";
import { readBinaryColumns } from "./binary_columns.ts";
import type { BinaryColumn } from "./binary_columns.ts";
import { decodeBinaryColumn } from "./binary_table.ts";
import { readScaling } from "./column_texts.ts";
import type { FitsChecksums } from "./checksum.ts";
import type { ColumnHead, FitsColumn } from "./column.ts";
import { decodeNumbers } from "./decode_numbers.ts";
import type { NumberLetter } from "./decode_numbers.ts";
import { fitsError } from "./fits_error.ts";
import type { FitsHeader } from "./header.ts";
import { checkDecodedSize } from "./source.ts";
import type { Source } from "./source.ts";
import type { HduKind, Structure } from "./structure.ts";
import { verifyChecksums } from "./verify_checksums.ts";
import { toNumbers } from "./values.ts";
import type { FitsNumbers, FitsValues } from "./values.ts";

export type { HduKind } from "./structure.ts";

/** A decoded image. */
export interface FitsImage {
  /** Lengths of the axes (NAXISn), first axis (fastest) first. */
  readonly shape: readonly number[];
  /** Unit (BUNIT). */
  readonly unit: string | null;
  /** Physical values, first axis fastest; NaN where missing (BLANK or NaN). */
  readonly data: Float64Array;
}

/** A decoded image in its natural type, with integers exact. */
export interface FitsExactImage {
  /** Lengths of the axes (NAXISn), first axis (fastest) first. */
  readonly shape: readonly number[];
  /** Unit (BUNIT). */
  readonly unit: string | null;
  /** Physical values, first axis fastest. */
  readonly data: FitsNumbers;
  /** 1 where an integer is BLANK, otherwise 0; null when there is no such value. */
  readonly missing: Uint8Array | null;
}

/** Which cells of a column {@linkcode Hdu.numbers} gives. */
export interface NumbersOptions {
  /**
   * Only this row, from 0: needed for a column of arrays of varying length.
   * @default {undefined}
   */
  readonly row?: number;
}

const LETTERS: Readonly<Record<number, NumberLetter>> = {
  8: "B",
  16: "I",
  32: "J",
  64: "K",
  [-32]: "E",
  [-64]: "D",
};

const REFUSED: Partial<Record<HduKind, readonly [rule: string, remedy: string]>> = {
  "compressed-image": [
    "images compressed within a table are not read",
    "decompress the file first, for instance with funpack",
  ],
  "compressed-table": [
    "compressed tables are not read",
    "decompress the file first, for instance with funpack",
  ],
  "random-groups": ["random groups are not read", "convert the file to an image or a table"],
  "empty": ["this HDU holds no data", "give the number or name of another HDU"],
};

/**
 * One header and data unit. Data are decoded when they are asked for, anew each time.
 *
 * @example A table's column by name
 * ```ts
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "table",
 *   name: "SPECTRUM",
 *   columns: [{ name: "WAVE", unit: "nm", data: new Float64Array([656.2, 656.3]) }],
 * }]);
 * const hdu = parseFits(bytes).hdus[1]!;
 * assertEquals([hdu.name, hdu.kind, hdu.rows, hdu.columns[0]!.unit], ["SPECTRUM", "table", 2, "nm"]);
 * assertEquals(hdu.numbers("wave"), new Float64Array([656.2, 656.3]));
 * ```
 */
export class Hdu {
  /** Number, from 0 (the primary one). */
  readonly index: number;
  /** EXTNAME, empty when there is none. */
  readonly name: string;
  /** EXTVER. */
  readonly version: number;
  /** What it holds. */
  readonly kind: HduKind;
  /** Its header. */
  readonly header: FitsHeader;
  /** Lengths of the axes (NAXISn), first axis (fastest) first. */
  readonly shape: readonly number[];
  /** Byte of the file at which the header begins. */
  readonly offset: number;
  /** Byte of the file at which the data begin. */
  readonly data_offset: number;
  /** Bytes of data, without the filling of the last block. */
  readonly data_bytes: number;
  readonly #file: Uint8Array;
  readonly #source: Source;
  readonly #structure: Structure;
  #columns: readonly (BinaryColumn | AsciiColumn)[] | undefined;

  /**
   * Made by {@linkcode parseFits}.
   *
   * @param file The whole file.
   * @param parts Header, structure and place.
   */
  constructor(
    file: Uint8Array,
    parts: {
      /** The header. */
      readonly header: FitsHeader;
      /** What the mandatory keywords say. */
      readonly structure: Structure;
      /** Byte at which the header begins. */
      readonly offset: number;
      /** The data. */
      readonly source: Source;
    },
  ) {
    const { header, structure, offset, source } = parts;
    this.index = source.hdu;
    this.name = header.string("EXTNAME")?.trim() ?? "";
    const version = header.card("EXTVER")?.value;
    this.version = typeof version === "number" ? version : 1;
    this.kind = structure.kind;
    this.header = header;
    this.shape = structure.shape;
    this.offset = offset;
    this.data_offset = source.offset;
    this.data_bytes = structure.data_bytes;
    this.#file = file;
    this.#source = source;
    this.#structure = structure;
  }

  /** Number of rows of a table; 0 for anything else. */
  get rows(): number {
    return this.kind === "table" ? this.shape[1] ?? 0 : 0;
  }

  /**
   * What the header says of a table's columns; empty for anything else.
   *
   * @throws {InputError} If a column's format is wrong.
   */
  get columns(): readonly ColumnHead[] {
    return this.kind === "table" ? this.#layout().map(({ head }) => head) : [];
  }

  /**
   * Decodes the image to doubles.
   *
   * @returns Shape and physical values; integers beyond 2^53 are rounded to the nearest double.
   * @throws {InputError} If this is no image, or its scaling cannot be read.
   */
  image(): FitsImage {
    const { shape, unit, data, missing } = this.exactImage();
    return { shape, unit, data: toNumbers({ kind: "number", data, missing })! };
  }

  /**
   * Decodes the image to its natural type.
   *
   * @returns Shape, physical values and where they are missing.
   * @throws {InputError} If this is no image, or its scaling cannot be read.
   */
  exactImage(): FitsExactImage {
    this.#require("image");
    const { bitpix, shape, data_bytes } = this.#structure;
    const { header } = this;
    const elements = shape.reduce((product, length) => product * length, 1);
    checkDecodedSize(this.#source, elements * 8);
    const bytes = this.#source.bytes.subarray(
      0,
      Math.min(data_bytes, elements * Math.abs(bitpix) / 8),
    );
    const scaling = readScaling(header, ["BSCALE", "BZERO", "BLANK"]);
    const { data, missing } = decodeNumbers(bytes, LETTERS[bitpix] ?? "B", scaling);
    return { shape, unit: header.string("BUNIT")?.trim() || null, data, missing };
  }

  /**
   * Decodes a column of a table.
   *
   * @param key Name, without regard to case, or number from 1.
   * @returns The column.
   * @throws {InputError} If this is no table, there is no such column, or it is damaged.
   */
  column(key: string | number): FitsColumn {
    this.#require("table");
    const found = this.#find(this.#layout(), key);
    const { header } = this;
    return "form" in found
      ? decodeBinaryColumn(header, this.#source, found)
      : decodeAsciiColumn(header, this.#source, found);
  }

  /**
   * Decodes a column of numbers, logical values or bits to doubles.
   *
   * @param key Name, without regard to case, or number from 1.
   * @param options A row.
   * @returns Rows × width values, row by row; NaN where missing. With `row`, that row's values.
   * @throws {InputError} As {@linkcode Hdu.column}, and if the column holds anything else.
   */
  numbers(key: string | number, options: NumbersOptions = {}): Float64Array {
    const { row } = options;
    const column = this.column(key);
    if (row !== undefined && !(Number.isInteger(row) && row >= 0 && row < column.rows)) {
      const rule = `the row must be a whole number from 0 to ${column.rows - 1}`;
      throw fitsError(this.#source, rule, { value: row, key: String(key) });
    }
    const values: FitsValues | undefined = column.kind === "variable" && row !== undefined
      ? column.cells[row]
      : column;
    const numbers = values === undefined ? null : toNumbers(values);
    if (numbers === null) {
      const variable = values?.kind === "variable";
      throw fitsError(
        this.#source,
        variable ? "an array of varying length is read row by row" : "the column must hold numbers",
        { value: column.format, key: String(key) },
      );
    }
    const { width } = column;
    if (row === undefined || column.kind === "variable") return numbers;
    return numbers.subarray(row * width, (row + 1) * width);
  }

  /**
   * Decodes a column of strings.
   *
   * @param key Name, without regard to case, or number from 1.
   * @returns Rows × width strings, without trailing blanks.
   * @throws {InputError} As {@linkcode Hdu.column}, and if the column holds anything else.
   */
  texts(key: string | number): readonly string[] {
    const column = this.column(key);
    if (column.kind === "text") return column.data;
    throw fitsError(this.#source, "the column must hold strings", {
      value: column.format,
      key: String(key),
    });
  }

  /**
   * Checks DATASUM and CHECKSUM (FITS 4.0, Appendix J).
   *
   * @returns Whether each agrees; null where the header has none.
   */
  checksums(): FitsChecksums {
    const { header, offset, data_offset, data_bytes } = this;
    return verifyChecksums(this.#file, { header, offset, data_offset, data_bytes });
  }

  #layout(): readonly (BinaryColumn | AsciiColumn)[] {
    const read = this.#structure.extension === "TABLE" ? readAsciiColumns : readBinaryColumns;
    return this.#columns ??= read(this.header, this.#source);
  }

  #require(kind: "image" | "table"): void {
    if (this.kind === kind) return;
    const [rule, remedy] = REFUSED[this.kind] ?? [
      `an HDU that holds ${kind === "image" ? "an image" : "a table"} is needed`,
      "give the number or name of another HDU",
    ];
    const value = this.kind === "other" ? this.#structure.extension : this.kind;
    throw fitsError(this.#source, rule, { value, offset: this.offset, remedy });
  }

  #find<C extends { readonly head: ColumnHead }>(columns: readonly C[], key: string | number): C {
    const names = columns.map(({ head }) => head.name);
    const index = typeof key === "number"
      ? key - 1
      : names.includes(key)
      ? names.indexOf(key)
      : names.findIndex((name) => name.toUpperCase() === key.trim().toUpperCase());
    const found = columns[index];
    if (found !== undefined) return found;
    const nearest = typeof key === "string" && names.length > 0 ? closestString(key, names) : "";
    throw fitsError(this.#source, `the table must have such a column: it has ${names.join(", ")}`, {
      value: key,
      ...(nearest === "" ? {} : { remedy: `the nearest name is ${nearest}` }),
    });
  }
}
