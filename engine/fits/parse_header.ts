import type { Warning } from "../errors.ts";
import type { Card } from "./card.ts";
import { fitsError } from "./fits_error.ts";
import type { Place } from "./fits_error.ts";
import { FitsHeader } from "./header.ts";
import { parseCard } from "./parse_card.ts";
import type { RawCard } from "./parse_card.ts";

/** Bytes of one card. */
export const CARD = 80;
/** Bytes of one block. */
export const BLOCK = 2880;

/** A header and where it ends. */
export interface ParsedHeader {
  /** The header. */
  readonly header: FitsHeader;
  /** Byte after its last block, where the data begin. */
  readonly end: number;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

// More than this many unreadable cards in one header are summed up in one warning.
const MOST_WARNINGS = 10;

const ascii = new TextDecoder("latin1");

function joinContinued(cards: Card[], next: RawCard): boolean {
  const last = cards[cards.length - 1];
  if (next.keyword !== "CONTINUE" || typeof next.value !== "string" || last === undefined) {
    return false;
  }
  if (last.commentary || typeof last.value !== "string" || !last.value.endsWith("&")) return false;
  const value = last.value.slice(0, -1) + next.value;
  const comment = [last.comment, next.comment].filter((part) => part !== "").join(" ");
  cards[cards.length - 1] = { ...last, value, text: value, comment };
  return true;
}

function finish(card: Card): Card {
  if (typeof card.value !== "string" || card.commentary) return card;
  const value = card.value.trimEnd();
  return { ...card, value, text: value };
}

function warningsOf(cards: readonly Card[], place: Place, foreign: boolean): Warning[] {
  const bad = cards.filter(({ problem }) => problem !== undefined);
  const warnings = bad.slice(0, MOST_WARNINGS).map(({ keyword, problem, offset }) => ({
    code: "fits-card-unreadable",
    text: `HDU ${place.hdu}, byte ${offset}: the value of ${keyword} cannot be read: ${problem}`,
  }));
  if (bad.length > MOST_WARNINGS) {
    warnings.push({
      code: "fits-card-unreadable",
      text: `HDU ${place.hdu}: ${bad.length - MOST_WARNINGS} more values cannot be read`,
    });
  }
  if (foreign) {
    warnings.push({
      code: "fits-header-not-ascii",
      text: `HDU ${place.hdu}: the header holds characters that are not printable ASCII`,
    });
  }
  return warnings;
}

/**
 * Reads the header that begins at a byte.
 *
 * @param bytes The whole file.
 * @param start Byte at which the header begins.
 * @param place File and HDU, for messages.
 * @returns The header and where it ends.
 * @throws {InputError} If the file ends before an END card.
 */
export function parseHeader(bytes: Uint8Array, start: number, place: Place): ParsedHeader {
  const cards: Card[] = [];
  let foreign = false;
  for (let offset = start; offset + 3 <= bytes.length; offset += CARD) {
    const record = ascii.decode(bytes.subarray(offset, offset + CARD)).padEnd(CARD);
    if (/^END(?: {5}|$)/.test(record.slice(0, 8))) {
      const end = start + Math.ceil((offset + CARD - start) / BLOCK) * BLOCK;
      const finished = cards.map(finish);
      return {
        header: new FitsHeader(finished, place),
        end,
        warnings: warningsOf(finished, place, foreign),
      };
    }
    foreign ||= /[^ -~]/.test(record);
    const raw = parseCard(record);
    if (!joinContinued(cards, raw)) cards.push({ ...raw, offset });
  }
  throw fitsError(place, "the header must end with an END card and the file ends before it", {
    offset: bytes.length,
    remedy: "copy the file again from where it came from",
  });
}
