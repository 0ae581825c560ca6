import { InputError } from "../errors.ts";

/** A point of a contour, in units of the font size; y upwards. */
export interface GlyphPoint {
  /** To the right. */
  readonly x: number;
  /** Upwards. */
  readonly y: number;
  /** False for the control point of a quadratic curve. */
  readonly on: boolean;
}

/** The closed contours of a glyph. */
export type GlyphContours = readonly (readonly GlyphPoint[])[];

/**
 * Reads outlines from a TrueType font: the tables `head`, `maxp`, `loca` and `glyf` of the OpenType
 * specification, composite glyphs included.
 *
 * @param bytes The font file.
 * @returns Gives the contours of a glyph by its index, in units of the font size.
 * @throws {InputError} When a table is missing.
 *
 * @example
 * ```ts
 * import { fontFace, glyphOutlines } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const { bytes, metrics } = fontFace("regular");
 * const contours = glyphOutlines(bytes)(metrics.glyph("o".codePointAt(0)!));
 * assertEquals(contours.length, 2); // the bowl and its counter
 * ```
 */
export function glyphOutlines(bytes: Uint8Array): (glyph: number) => GlyphContours {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const table = (tag: string): number => {
    for (let at = 12, i = 0; i < view.getUint16(4); i++, at += 16) {
      if (String.fromCharCode(...bytes.subarray(at, at + 4)) === tag) return view.getUint32(at + 8);
    }
    throw new InputError({ action: "read font", rule: `it must have a table "${tag}"` });
  };
  const [head, loca, glyf] = [table("head"), table("loca"), table("glyf")];
  const count = view.getUint16(table("maxp") + 4);
  const unit = 1 / view.getUint16(head + 18);
  const long = view.getInt16(head + 50) === 1;
  const place = (glyph: number) =>
    glyf + (long ? view.getUint32(loca + 4 * glyph) : 2 * view.getUint16(loca + 2 * glyph));
  const known = new Map<number, GlyphContours>();
  const read = (glyph: number): GlyphContours => {
    if (glyph >= count || place(glyph) === place(glyph + 1)) return [];
    const at = place(glyph);
    const contours = view.getInt16(at);
    return contours >= 0 ? simple(view, { at, contours, unit }) : composite(at + 10);
  };
  const composite = (start: number): GlyphContours => {
    const all: (readonly GlyphPoint[])[] = [];
    let at = start;
    let flags: number;
    do {
      flags = view.getUint16(at);
      const part = outline(view.getUint16(at + 2));
      const words = (flags & 0x1) !== 0;
      const dx = words ? view.getInt16(at + 4) : view.getInt8(at + 4);
      const dy = words ? view.getInt16(at + 6) : view.getInt8(at + 5);
      at += words ? 8 : 6;
      const fraction = () => {
        at += 2;
        return view.getInt16(at - 2) / 16384;
      };
      let [a, b, c, d] = [1, 0, 0, 1];
      if (flags & 0x8) a = d = fraction();
      else if (flags & 0x40) [a, d] = [fraction(), fraction()];
      else if (flags & 0x80) [a, b, c, d] = [fraction(), fraction(), fraction(), fraction()];
      for (const contour of part) {
        all.push(contour.map(({ x, y, on }) => ({
          x: a * x + c * y + dx * unit,
          y: b * x + d * y + dy * unit,
          on,
        })));
      }
    } while (flags & 0x20);
    return all;
  };
  const outline = (glyph: number): GlyphContours => {
    const contours = known.get(glyph) ?? read(glyph);
    known.set(glyph, contours);
    return contours;
  };
  return outline;
}

/** A glyph of points of its own. */
function simple(
  view: DataView,
  glyph: { readonly at: number; readonly contours: number; readonly unit: number },
): GlyphContours {
  const { contours, unit } = glyph;
  let at = glyph.at + 10;
  const ends = Array.from({ length: contours }, (_, i) => view.getUint16(at + 2 * i));
  const count = (ends.at(-1) ?? -1) + 1;
  at += 2 * contours;
  at += 2 + view.getUint16(at); // past the instructions
  const flags: number[] = [];
  while (flags.length < count) {
    const flag = view.getUint8(at++);
    flags.push(flag);
    if (flag & 0x8) { for (let n = view.getUint8(at++); n > 0; n--) flags.push(flag); }
  }
  // Differences of one byte with a sign bit, of two bytes, or none.
  const coordinates = (short: number, same: number) => {
    let value = 0;
    return flags.map((flag) => {
      if (flag & short) value += flag & same ? view.getUint8(at++) : -view.getUint8(at++);
      else if (!(flag & same)) {
        value += view.getInt16(at);
        at += 2;
      }
      return value;
    });
  };
  const xs = coordinates(0x2, 0x10);
  const ys = coordinates(0x4, 0x20);
  const points = flags.map((flag, i): GlyphPoint => ({
    x: xs[i]! * unit,
    y: ys[i]! * unit,
    on: (flag & 1) === 1,
  }));
  return ends.map((end, i) => points.slice(i === 0 ? 0 : ends[i - 1]! + 1, end + 1));
}
