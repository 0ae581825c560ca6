import type { FitsComplex } from "./card.ts";
import type { FitsNumbers } from "./values.ts";

/** A card to be written. */
export interface CardSpec {
  /**
   * Keyword: up to 8 of A to Z, 0 to 9, hyphen and underscore; a longer one or one with blanks is
   * written by the HIERARCH convention. Several COMMENT and HISTORY cards may be given.
   */
  readonly keyword: string;
  /**
   * Value, or the text of COMMENT and HISTORY. A string too long for one card is continued on the
   * next. Since FITS knows only ASCII, other letters lose their accents, Greek ones are spelt out,
   * and what is left becomes a question mark. What has no value gets no card.
   */
  readonly value: string | number | bigint | boolean | FitsComplex;
  /** Comment, cut where the card ends. */
  readonly comment?: string;
}

/** What images and tables have in common. */
export interface HduSpecBase {
  /** EXTNAME. */
  readonly name?: string;
  /** EXTVER. */
  readonly version?: number;
  /** Further cards; those that the writer makes itself are refused. */
  readonly cards?: readonly CardSpec[];
}

/** An image to be written. */
export interface ImageSpec extends HduSpecBase {
  /** Tells the kinds apart. */
  readonly kind: "image";
  /** Lengths of the axes, first axis (fastest) first; empty when there are no data. */
  readonly shape: readonly number[];
  /** Values, first axis fastest; their type gives BITPIX, and BZERO where it is needed. */
  readonly data: FitsNumbers | null;
  /** BUNIT. */
  readonly unit?: string;
  /** Value of `data` that means missing, of integers only (BLANK). */
  readonly blank?: number | bigint;
}

/** A column to be written. */
export interface ColumnSpec {
  /** Name (TTYPEn). */
  readonly name: string;
  /** Values, row by row; null is a missing logical value. */
  readonly data: FitsNumbers | readonly string[] | readonly (boolean | null)[];
  /**
   * Lengths of a cell's axes, first axis fastest.
   * @default {[]}
   */
  readonly shape?: readonly number[];
  /**
   * Whether `data` are real and imaginary parts in turn; of Float32Array and Float64Array only.
   * @default {false}
   */
  readonly complex?: boolean;
  /** Unit (TUNITn). */
  readonly unit?: string;
  /** How the column likes to be shown (TDISPn). */
  readonly display?: string;
  /** What the column holds: the comment of TTYPEn. */
  readonly description?: string;
  /** Value of `data` that means missing, of integers only (TNULLn). */
  readonly null_value?: number | bigint;
}

/** A binary table to be written. */
export interface TableSpec extends HduSpecBase {
  /** Tells the kinds apart. */
  readonly kind: "table";
  /** Columns, all with the same number of rows. */
  readonly columns: readonly ColumnSpec[];
}

/** A header and data unit to be written. */
export type HduSpec = ImageSpec | TableSpec;
