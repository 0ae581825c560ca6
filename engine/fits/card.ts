/** A complex number, as a card's value. */
export interface FitsComplex {
  /** Real part. */
  readonly re: number;
  /** Imaginary part. */
  readonly im: number;
}

/**
 * Value of a card. An integer that a double does not hold exactly is a bigint. Null is a value that
 * the card leaves undefined, or one that could not be read (then the card has a `problem`).
 */
export type CardValue = string | number | bigint | boolean | FitsComplex | null;

/** One card of a header: keyword, value and comment. */
export interface Card {
  /** Keyword, upper-case; `COMMENT`, `HISTORY` or empty for commentary; without `HIERARCH`. */
  readonly keyword: string;
  /** Value; for commentary its text. Trailing blanks of strings are dropped. */
  readonly value: CardValue;
  /** Value as it is written in the file, without quotes. */
  readonly text: string;
  /** Comment after the value; empty when there is none. */
  readonly comment: string;
  /** True for cards without a value: COMMENT, HISTORY, blank and free text. */
  readonly commentary: boolean;
  /** Byte of the file at which the card begins. */
  readonly offset: number;
  /** Why the value could not be read. */
  readonly problem?: string;
}
