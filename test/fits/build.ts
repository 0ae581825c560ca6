/** Bytes of a text, one a letter. */
export const bytesOf = (text: string): Uint8Array =>
  Uint8Array.from(text, (letter) => letter.charCodeAt(0));

/** A card in fixed format. */
export const card = (keyword: string, value: string | number | boolean): string =>
  `${keyword.padEnd(8)}= ${
    typeof value === "string"
      ? value
      : String(value === true ? "T" : value === false ? "F" : value).padStart(20)
  }`;

const filled = (bytes: Uint8Array, filler: number) => {
  const out = new Uint8Array(Math.ceil(bytes.length / 2880) * 2880).fill(filler);
  out.set(bytes);
  return out;
};

/** A header and data unit of these cards and bytes, filled up to whole blocks. */
export function unit(cards: readonly string[], data: Uint8Array = new Uint8Array()): Uint8Array {
  const header = filled(bytesOf([...cards, "END"].map((text) => text.padEnd(80)).join("")), 0x20);
  return join(header, filled(data, 0));
}

/** Bytes one after the other. */
export function join(...parts: readonly Uint8Array[]): Uint8Array {
  const out = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}

/** A primary HDU without data, with further cards. */
export const primary = (...cards: readonly string[]): Uint8Array =>
  unit([card("SIMPLE", true), card("BITPIX", 8), card("NAXIS", 0), ...cards]);

/** A file with one extension. */
export const extension = (
  type: string,
  cards: readonly string[],
  data?: Uint8Array,
): Uint8Array => join(primary(), unit([card("XTENSION", `'${type.padEnd(8)}'`), ...cards], data));

/** The cards of a table's axes. */
export const tableCards = (row: number, rows: number, fields: number, pcount = 0): string[] => [
  card("BITPIX", 8),
  card("NAXIS", 2),
  card("NAXIS1", row),
  card("NAXIS2", rows),
  card("PCOUNT", pcount),
  card("GCOUNT", 1),
  card("TFIELDS", fields),
];
