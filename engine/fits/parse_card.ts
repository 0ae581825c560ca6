import type { CardValue } from "./card.ts";

/** What stands in a card's value and comment fields. */
export interface CardField {
  /** The value; null when undefined or unreadable. */
  readonly value: CardValue;
  /** The value as written. */
  readonly text: string;
  /** The comment. */
  readonly comment: string;
  /** Why the value could not be read. */
  readonly problem?: string;
}

/** One record of 80 characters, taken apart. */
export interface RawCard extends CardField {
  /** Keyword, upper-case. */
  readonly keyword: string;
  /** True when the card has no value. */
  readonly commentary: boolean;
}

const INTEGER = /^[+-]?\d+$/;
const REAL = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[EeDd][+-]?\d+)?$/;

function parseNumber(text: string): number | bigint | undefined {
  if (INTEGER.test(text)) {
    const value = Number(text);
    return Number.isSafeInteger(value) ? value : BigInt(text.replace(/^\+/, ""));
  }
  if (!REAL.test(text)) return undefined;
  const value = Number(text.replace(/[Dd]/, "E"));
  return Number.isFinite(value) ? value : undefined;
}

function parseComplex(text: string): CardValue | undefined {
  const parts = text.slice(1, -1).split(",").map((part) => parseNumber(part.trim()));
  const [re, im] = parts;
  if (!text.endsWith(")") || parts.length !== 2 || re === undefined || im === undefined) {
    return undefined;
  }
  return { re: Number(re), im: Number(im) };
}

// A quote within a string is doubled (FITS 4.0, 4.2.1).
function parseString(field: string): CardField {
  let value = "";
  let at = 1;
  for (;;) {
    const quote = field.indexOf("'", at);
    if (quote < 0) {
      const text = field.trimEnd();
      return { value: null, text, comment: "", problem: "its quote is not closed" };
    }
    value += field.slice(at, quote);
    at = quote + 1;
    if (field[at] !== "'") break;
    value += "'";
    at++;
  }
  const rest = field.slice(at).trim();
  const comment = rest.startsWith("/") ? rest.slice(1).trim() : "";
  return { value, text: value, comment };
}

/**
 * Takes value and comment fields apart (FITS 4.0, 4.2). Strings keep their trailing blanks here,
 * since a continued string needs them.
 *
 * @param field Characters after the value indicator.
 * @returns Value, its text and the comment.
 */
export function parseField(field: string): CardField {
  const trimmed = field.trimStart();
  if (trimmed.startsWith("'")) return parseString(trimmed);
  const slash = trimmed.indexOf("/");
  const text = (slash < 0 ? trimmed : trimmed.slice(0, slash)).trim();
  const comment = slash < 0 ? "" : trimmed.slice(slash + 1).trim();
  if (text === "") return { value: null, text, comment };
  if (text === "T" || text === "F") return { value: text === "T", text, comment };
  const value = text.startsWith("(") ? parseComplex(text) : parseNumber(text);
  if (value !== undefined) return { value, text, comment };
  return { value: null, text, comment, problem: "it is no string, number or logical" };
}

const commentaryOf = (keyword: string, text: string): RawCard => ({
  keyword,
  value: text.trimEnd(),
  text: text.trimEnd(),
  comment: "",
  commentary: true,
});

/**
 * Takes one record apart (FITS 4.0, 4.1; HIERARCH as registered).
 *
 * @param record 80 characters.
 * @returns Keyword, value and comment.
 */
export function parseCard(record: string): RawCard {
  const keyword = record.slice(0, 8).trimEnd().toUpperCase();
  if (keyword === "COMMENT" || keyword === "HISTORY" || keyword === "") {
    return commentaryOf(keyword, record.slice(8));
  }
  if (keyword === "HIERARCH") {
    const equals = record.indexOf("=");
    if (equals < 0) return commentaryOf(keyword, record.slice(8));
    const name = record.slice(8, equals).trim().replace(/\s+/g, " ").toUpperCase();
    return { keyword: name, commentary: false, ...parseField(record.slice(equals + 1)) };
  }
  if (keyword === "CONTINUE" && record[8] !== "=") {
    return { keyword, commentary: false, ...parseField(record.slice(8)) };
  }
  // The blank after the equals sign is left out by some writers; the meaning is plain all the same.
  if (record[8] !== "=") return commentaryOf(keyword, record.slice(8));
  return { keyword, commentary: false, ...parseField(record.slice(9)) };
}
