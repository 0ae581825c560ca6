import { InputError } from "../errors.ts";
import type { CardSpec } from "./hdu_spec.ts";
import { CARD } from "./parse_header.ts";

const action = "write FITS file";

const GREEK = [
  "alpha beta gamma delta epsilon zeta eta theta iota kappa lambda mu",
  "nu xi omicron pi rho sigma sigma tau upsilon phi chi psi omega",
].join(" ").split(" ");

function spellGreek(letter: string): string {
  const name = GREEK[letter.toLowerCase().charCodeAt(0) - 0x3b1] ?? "?";
  return letter === letter.toLowerCase() ? name : name.charAt(0).toUpperCase() + name.slice(1);
}

/**
 * Brings a text to printable ASCII, the only letters of FITS.
 *
 * @param text The text.
 * @returns The text without accents, Greek letters spelt out, with question marks for what is left.
 */
export function toAscii(text: string): string {
  return text.normalize("NFKD").replaceAll(/\p{M}/gu, "").replaceAll(/\s/gu, " ")
    .replaceAll(/[\u2010-\u2015\u2212]/gu, "-").replaceAll(/[\u0391-\u03c9]/gu, spellGreek)
    .replaceAll(/[^ -~]/gu, "?");
}

function formatReal(value: number): string {
  if (Object.is(value, -0)) return "-0.0";
  const [mantissa = "", exponent] = String(value).toUpperCase().split("E");
  const point = mantissa.includes(".") ? mantissa : `${mantissa}.0`;
  return exponent === undefined ? point : `${point}E${exponent}`;
}

function formatNumber(value: number, keyword: string): string {
  if (!Number.isFinite(value)) {
    throw new InputError({
      action,
      rule: "a number in a header must be finite",
      value: String(value),
      key: keyword,
      remedy: "leave the card out",
    });
  }
  return Number.isSafeInteger(value) && !Object.is(value, -0) ? String(value) : formatReal(value);
}

function formatValue(value: Exclude<CardSpec["value"], string>, keyword: string): string {
  if (typeof value === "boolean") return value ? "T" : "F";
  if (typeof value === "bigint") return String(value);
  if (typeof value === "number") return formatNumber(value, keyword);
  return `(${formatNumber(value.re, keyword)}, ${formatNumber(value.im, keyword)})`;
}

// Pieces of a string with its quotes doubled, none longer than the room, no doubled quote cut.
function split(text: string, first: number, next: number): string[] {
  const pieces: string[] = [];
  let rest = text;
  let room = first;
  while (rest.length > room) {
    // One character of the room is the ampersand.
    let cut = room - 1;
    const quotes = /'*$/.exec(rest.slice(0, cut))![0].length;
    if (quotes % 2 === 1) cut--;
    pieces.push(`${rest.slice(0, cut)}&`);
    rest = rest.slice(cut);
    room = next;
  }
  return [...pieces, rest];
}

function finish(body: string, comment: string): string {
  const text = comment === "" ? body : `${body} / ${comment}`;
  return text.slice(0, CARD).padEnd(CARD);
}

function encodeString(prefix: string, value: string, comment: string): string[] {
  const text = toAscii(value).trimEnd().replaceAll("'", "''");
  const quotes = 2;
  const pieces = split(text, CARD - prefix.length - quotes, CARD - 10 - quotes);
  return pieces.map((piece, k) => {
    const start = k === 0 ? prefix : "CONTINUE  ";
    const quoted = `'${pieces.length === 1 ? piece.padEnd(8) : piece}'`;
    return finish(
      `${start}${k === 0 ? quoted.padEnd(20) : quoted}`,
      k === pieces.length - 1 ? comment : "",
    );
  });
}

function encodeCommentary(keyword: string, text: string): string[] {
  const ascii = toAscii(text);
  const width = CARD - 8;
  const count = Math.max(1, Math.ceil(ascii.length / width));
  return Array.from(
    { length: count },
    (_, k) => (keyword.padEnd(8) + ascii.slice(k * width, (k + 1) * width)).padEnd(CARD),
  );
}

/**
 * Writes a card as one record, or as several for a long string or text.
 *
 * @param card Keyword, value and comment.
 * @returns Records of 80 characters.
 * @throws {InputError} If the keyword cannot be written or a number is not finite.
 */
export function encodeCard(card: CardSpec): string[] {
  const keyword = card.keyword.toUpperCase();
  const comment = toAscii(card.comment ?? "").trim();
  if (keyword === "COMMENT" || keyword === "HISTORY") {
    return encodeCommentary(keyword, String(card.value));
  }
  const short = /^[A-Z0-9_-]{1,8}$/.test(keyword);
  if (!short && !/^[A-Z0-9_-]+(?: [A-Z0-9_-]+)*$/.test(keyword) || keyword.length > 40) {
    throw new InputError({
      action,
      rule:
        "a keyword must have at most 40 of A to Z, 0 to 9, hyphen, underscore and single blanks",
      value: card.keyword,
    });
  }
  const prefix = short ? `${keyword.padEnd(8)}= ` : `HIERARCH ${keyword} = `;
  if (typeof card.value === "string") return encodeString(prefix, card.value, comment);
  const value = formatValue(card.value, keyword);
  return [finish(prefix + (short ? value.padStart(20) : value), comment)];
}
