import { InputError } from "../errors.ts";
import type { InputErrorParts } from "../errors.ts";
import type { CardSpec, HduSpec } from "./hdu_spec.ts";

const OWN = new RegExp(
  "^(SIMPLE|XTENSION|BITPIX|NAXIS\\d*|EXTEND|PCOUNT|GCOUNT|TFIELDS|THEAP|END|EXTNAME|EXTVER|" +
    "CHECKSUM|DATASUM|BUNIT|BLANK|BSCALE|BZERO|LONGSTRN|CONTINUE|" +
    "(TTYPE|TFORM|TUNIT|TDIM|TDISP|TSCAL|TZERO|TNULL)\\d+)$",
);

// What fits on one card: names and units beyond it make other programs stumble.
const LONGEST = 68;

const refuse = (rule: string, parts: Partial<InputErrorParts>) =>
  new InputError({ action: "write FITS file", rule, ...parts });

function checkShort(text: string | undefined, key: string): void {
  if (text === undefined || text.replaceAll("'", "''").length <= LONGEST) return;
  throw refuse(`names and units must have at most ${LONGEST} letters`, { value: text, key });
}

function checkShape(shape: readonly number[], key: string): void {
  if (shape.length <= 999 && shape.every((n) => Number.isSafeInteger(n) && n >= 0)) return;
  throw refuse("a shape must hold at most 999 whole numbers, 0 or more", { value: shape, key });
}

function checkCards(cards: readonly CardSpec[]): void {
  const seen = new Set<string>();
  for (const { keyword } of cards) {
    const key = keyword.toUpperCase();
    if (OWN.test(key)) throw refuse("this card is made by the writer from the data", { key });
    if (key === "COMMENT" || key === "HISTORY") continue;
    if (seen.has(key)) throw refuse("a keyword must not come twice in a header", { key });
    seen.add(key);
  }
}

function checkColumns(spec: HduSpec): void {
  if (spec.kind === "image") return;
  const seen = new Set<string>();
  for (const { name, unit, display, shape = [] } of spec.columns) {
    if (!/^\w{1,68}$/.test(name)) {
      const rule = `a column's name must be 1 to ${LONGEST} letters, digits and underscores`;
      throw refuse(rule, { value: name });
    }
    if (seen.has(name.toUpperCase())) {
      throw refuse("a column's name must not come twice, case apart", { value: name });
    }
    seen.add(name.toUpperCase());
    checkShort(unit, name);
    checkShort(display, name);
    checkShape(shape, name);
  }
  if (spec.columns.length > 999) {
    throw refuse("a table must have at most 999 columns", { value: spec.columns.length });
  }
}

/**
 * Refuses what the standard forbids, and what makes other programs stumble.
 *
 * @param hdus What is to be written.
 * @throws {InputError} If a name, keyword or shape cannot be written, or comes twice.
 */
export function checkSpecs(hdus: readonly HduSpec[]): void {
  const seen = new Set<string>();
  for (const spec of hdus) {
    const { kind, name, version = 1, cards = [] } = spec;
    checkShort(name, "EXTNAME");
    checkCards(cards);
    checkColumns(spec);
    if (kind === "image") checkShape(spec.shape, "NAXIS");
    const identity = `${kind} ${name?.toUpperCase()} ${version}`;
    if (name !== undefined && seen.has(identity)) {
      throw refuse("HDUs of one kind and name must have different versions", { value: name });
    }
    seen.add(identity);
  }
}
