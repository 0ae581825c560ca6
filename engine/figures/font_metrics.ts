import { InputError } from "../errors.ts";

/** What layout needs of a font. */
export interface FontMetrics {
  /**
   * Tells whether the font has a glyph.
   *
   * @param code Unicode code point.
   */
  has(code: number): boolean;
  /**
   * Index of a character's glyph; 0 where there is none.
   *
   * @param code Unicode code point.
   */
  glyph(code: number): number;
  /**
   * Sum of the advance widths, in units of the font size.
   *
   * @param text The characters.
   */
  width(text: string): number;
}

/**
 * Reads advance widths and coverage from a TrueType font: the tables `head`, `hhea`, `hmtx` and `cmap`
 * (formats 4 and 12) of the OpenType specification.
 *
 * @param bytes The font file.
 * @returns Its metrics.
 * @throws {InputError} When a table is missing or has no Unicode map.
 *
 * @example
 * ```ts
 * import { fontFace } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const { metrics } = fontFace("regular");
 * assert(metrics.has(0x3b3)); // γ
 * assert(metrics.width("W") > metrics.width("i"));
 * ```
 */
export function readFontMetrics(bytes: Uint8Array): FontMetrics {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const table = (tag: string): number => {
    const count = bytes.length < 12 ? 0 : view.getUint16(4);
    for (let i = 0; i < count && 28 + 16 * i <= bytes.length; i++) {
      const at = 12 + 16 * i;
      if (String.fromCharCode(...bytes.subarray(at, at + 4)) === tag) return view.getUint32(at + 8);
    }
    throw new InputError({ action: "read font", rule: `it must have a table "${tag}"` });
  };
  const unitsPerEm = view.getUint16(table("head") + 18);
  const advances = view.getUint16(table("hhea") + 34);
  const hmtx = table("hmtx");
  const glyphs = readCharacterMap(view, table("cmap"));
  const advance = (code: number) => {
    const glyph = Math.min(glyphs.get(code) ?? 0, advances - 1);
    return view.getUint16(hmtx + 4 * glyph);
  };
  return {
    has: (code) => (glyphs.get(code) ?? 0) !== 0,
    glyph: (code) => glyphs.get(code) ?? 0,
    width(text) {
      let sum = 0;
      for (const character of text) sum += advance(character.codePointAt(0)!);
      return sum / unitsPerEm;
    },
  };
}

function readCharacterMap(view: DataView, cmap: number): Map<number, number> {
  const count = view.getUint16(cmap + 2);
  const glyphs = new Map<number, number>();
  for (let i = 0; i < count; i++) {
    const at = cmap + view.getUint32(cmap + 4 + 8 * i + 4);
    const format = view.getUint16(at);
    if (format === 4) readFormat4(view, at, glyphs);
    if (format === 12) readFormat12(view, at, glyphs);
  }
  if (glyphs.size === 0) {
    throw new InputError({ action: "read font", rule: "it must have a Unicode character map" });
  }
  return glyphs;
}

function readFormat4(view: DataView, at: number, glyphs: Map<number, number>): void {
  const twice = view.getUint16(at + 6); // twice the number of segments
  for (let s = 0; s < twice; s += 2) {
    const end = view.getUint16(at + 14 + s);
    const start = view.getUint16(at + 16 + twice + s);
    const delta = view.getUint16(at + 16 + 2 * twice + s);
    const rangeAt = at + 16 + 3 * twice + s;
    const range = view.getUint16(rangeAt);
    for (let code = start; code <= end && code < 0xffff; code++) {
      let glyph = code;
      if (range !== 0) {
        glyph = view.getUint16(rangeAt + range + 2 * (code - start));
        if (glyph === 0) continue;
      }
      glyphs.set(code, (glyph + delta) & 0xffff);
    }
  }
}

function readFormat12(view: DataView, at: number, glyphs: Map<number, number>): void {
  const groups = view.getUint32(at + 12);
  for (let g = 0; g < groups; g++) {
    const start = view.getUint32(at + 16 + 12 * g);
    const end = view.getUint32(at + 20 + 12 * g);
    const glyph = view.getUint32(at + 24 + 12 * g);
    for (let code = start; code <= end; code++) glyphs.set(code, glyph + code - start);
  }
}
