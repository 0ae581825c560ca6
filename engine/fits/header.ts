import type { Card, CardValue } from "./card.ts";
import { fitsError } from "./fits_error.ts";
import type { Place } from "./fits_error.ts";

const canonical = (key: string) =>
  key.trim().toUpperCase().replace(/^HIERARCH\s+/, "").replace(/\s+/g, " ");

/**
 * The header of one HDU. Keys are looked up without regard to case; HIERARCH keys with or without
 * that word. Where a key comes several times the first one counts, and {@linkcode FitsHeader.all}
 * gives them all. A key that is missing or has no value gives `undefined`.
 *
 * @example
 * ```ts
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "image",
 *   shape: [],
 *   data: null,
 *   cards: [{ keyword: "EXPTIME", value: 120.5, comment: "s" }],
 * }]);
 * const header = parseFits(bytes).hdus[0]!.header;
 * assertEquals(header.number("EXPTIME"), 120.5);
 * assertEquals(header.comment("EXPTIME"), "s");
 * assertEquals(header.string("OBJECT"), undefined);
 * ```
 */
export class FitsHeader {
  /** All cards but END, in the order of the file; continued strings are joined to one card. */
  readonly cards: readonly Card[];
  readonly #byKey = new Map<string, Card[]>();
  readonly #place: Place;

  /**
   * Makes a header of cards.
   *
   * @param cards The cards.
   * @param place File and HDU, for messages.
   */
  constructor(
    cards: readonly Card[],
    place: {
      /** File the bytes came from. */
      readonly file?: string | undefined;
      /** HDU, counted from 0. */
      readonly hdu: number;
    },
  ) {
    this.cards = cards;
    this.#place = place;
    for (const card of cards) {
      const known = this.#byKey.get(card.keyword);
      if (known === undefined) this.#byKey.set(card.keyword, [card]);
      else known.push(card);
    }
  }

  /**
   * Finds the first card of a key.
   *
   * @param key The keyword.
   * @returns The card.
   */
  card(key: string): Card | undefined {
    return this.#byKey.get(canonical(key))?.[0];
  }

  /**
   * Tells whether a key is there, with or without a value.
   *
   * @param key The keyword.
   * @returns True when it is.
   */
  has(key: string): boolean {
    return this.card(key) !== undefined;
  }

  /**
   * Gives the values of all cards of a key: of COMMENT and HISTORY the texts.
   *
   * @param key The keyword.
   * @returns Values in the order of the file.
   */
  all(key: string): CardValue[] {
    return (this.#byKey.get(canonical(key)) ?? []).map(({ value }) => value);
  }

  /**
   * Gives the comment of a key.
   *
   * @param key The keyword.
   * @returns The comment, empty when there is none.
   */
  comment(key: string): string {
    return this.card(key)?.comment ?? "";
  }

  /**
   * Gives a value as it is.
   *
   * @param key The keyword.
   * @returns The value.
   * @throws {InputError} If the card is there and its value cannot be read.
   */
  value(key: string): Exclude<CardValue, null> | undefined {
    const card = this.card(key);
    if (card?.problem !== undefined) throw this.#refuse(card, `and ${card.problem}`);
    return card?.value ?? undefined;
  }

  /**
   * Gives a number. One that the writer put in quotes is accepted, as older observatories did so.
   *
   * @param key The keyword.
   * @returns The value; an integer beyond 2^53 as the nearest double.
   * @throws {InputError} If the card is there and its value is no number.
   */
  number(key: string): number | undefined {
    const value = this.value(key);
    if (value === undefined || typeof value === "number") return value;
    if (typeof value === "bigint") return Number(value);
    if (typeof value === "string" && /^\s*[+-]?[\d.]+(?:[EeDd][+-]?\d+)?\s*$/.test(value)) {
      const number = Number(value.replace(/[Dd]/, "E"));
      if (Number.isFinite(number)) return number;
    }
    throw this.#refuse(this.card(key), "as a number");
  }

  /**
   * Gives a text. A value that was written without quotes is given as it is written.
   *
   * @param key The keyword.
   * @returns The text.
   */
  string(key: string): string | undefined {
    const card = this.card(key);
    if (card === undefined || (card.value === null && card.text === "")) return undefined;
    return typeof card.value === "string" ? card.value : card.text;
  }

  /**
   * Gives a logical value.
   *
   * @param key The keyword.
   * @returns The value.
   * @throws {InputError} If the card is there and its value is neither T nor F.
   */
  boolean(key: string): boolean | undefined {
    const value = this.value(key);
    if (value === undefined || typeof value === "boolean") return value;
    throw this.#refuse(this.card(key), "as T or F");
  }

  #refuse(card: Card | undefined, wanted: string) {
    return fitsError(this.#place, `the value of this keyword must be readable ${wanted}`, {
      value: card?.text,
      ...(card === undefined ? {} : { key: card.keyword, offset: card.offset }),
      remedy: "mend the header",
    });
  }
}
