import { deflateSync } from "node:zlib";
import { readFontMetrics } from "./font_metrics.ts";

/** Tables that a browser needs; kerning and ligatures are left out. */
const KEPT = [
  "OS/2",
  "cmap",
  "cvt ",
  "fpgm",
  "glyf",
  "head",
  "hhea",
  "hmtx",
  "loca",
  "maxp",
  "name",
  "post",
  "prep",
];

/**
 * Makes a web font (WOFF 1.0, W3C Recommendation 2012) of a TrueType font with some of its
 * characters: the glyphs keep their numbers, those not needed become empty.
 *
 * @param ttf The font file.
 * @param options Which characters are kept.
 * @returns The bytes of the WOFF file; the same font gives the same bytes.
 *
 * @example
 * ```ts
 * import { fontFace, webFont } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const ttf = fontFace("regular").bytes;
 * const woff = webFont(ttf, { characters: "km s−1" });
 * assert(woff.length < ttf.length / 10);
 * ```
 */
export function webFont(
  ttf: Uint8Array,
  options: {
    /** The characters, in any order. */
    readonly characters: string;
  },
): Uint8Array {
  const tables = readTables(ttf);
  const metrics = readFontMetrics(ttf);
  const codes = [...new Set(options.characters)].map((c) => c.codePointAt(0)!)
    .filter((code) => code < 0xffff && metrics.has(code)).sort((a, b) => a - b);
  const glyphs = codes.map((code) => metrics.glyph(code));
  const { glyf, loca } = emptyUnused(tables, glyphs);
  const changed = new Map(tables);
  changed.set("cmap", characterMap(codes, glyphs));
  changed.set("glyf", glyf);
  changed.set("loca", loca);
  changed.set("head", longOffsets(tables.get("head")!));
  changed.set("post", withoutNames(tables.get("post")!));
  return packWoff(KEPT.flatMap((tag) => {
    const data = changed.get(tag);
    return data ? [[tag, data] as const] : [];
  }));
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

function readTables(ttf: Uint8Array): Map<string, Uint8Array> {
  const view = viewOf(ttf);
  const tables = new Map<string, Uint8Array>();
  for (let i = 0; i < view.getUint16(4); i++) {
    const at = 12 + 16 * i;
    const tag = String.fromCharCode(...ttf.subarray(at, at + 4));
    const from = view.getUint32(at + 8);
    tables.set(tag, ttf.subarray(from, from + view.getUint32(at + 12)));
  }
  return tables;
}

/** Outlines of the glyphs in use and of the parts they are made of; the others have length zero. */
function emptyUnused(tables: ReadonlyMap<string, Uint8Array>, glyphs: readonly number[]) {
  const glyf = tables.get("glyf")!;
  const loca = viewOf(tables.get("loca")!);
  const long = viewOf(tables.get("head")!).getInt16(50) === 1;
  const count = viewOf(tables.get("maxp")!).getUint16(4);
  const at = (glyph: number) => long ? loca.getUint32(4 * glyph) : 2 * loca.getUint16(2 * glyph);
  const used = new Set([0]);
  const take = (glyph: number) => {
    if (used.has(glyph)) return;
    used.add(glyph);
    partsOf(glyf.subarray(at(glyph), at(glyph + 1))).forEach(take);
  };
  glyphs.forEach(take);
  const offsets = new Uint8Array(4 * (count + 1));
  const pieces: Uint8Array[] = [];
  let length = 0;
  for (let glyph = 0; glyph < count; glyph++) {
    viewOf(offsets).setUint32(4 * glyph, length);
    if (!used.has(glyph)) continue;
    const piece = glyf.subarray(at(glyph), at(glyph + 1));
    pieces.push(piece);
    length += piece.length;
  }
  viewOf(offsets).setUint32(4 * count, length);
  return { glyf: join(pieces), loca: offsets };
}

/** Glyphs of which a composite glyph is made (OpenType specification, table glyf). */
function partsOf(glyph: Uint8Array): number[] {
  const view = viewOf(glyph);
  if (glyph.length === 0 || view.getInt16(0) >= 0) return [];
  const parts: number[] = [];
  let at = 10;
  let flags: number;
  do {
    flags = view.getUint16(at);
    parts.push(view.getUint16(at + 2));
    at += 4 + (flags & 0x1 ? 4 : 2) + (flags & 0x8 ? 2 : flags & 0x40 ? 4 : flags & 0x80 ? 8 : 0);
  } while (flags & 0x20);
  return parts;
}

/** A character map of format 4: one segment per character, as they need no searching here. */
function characterMap(codes: readonly number[], glyphs: readonly number[]): Uint8Array {
  const count = codes.length + 1; // and the closing segment
  const size = 16 + 8 * count;
  const bytes = new Uint8Array(12 + size);
  const view = viewOf(bytes);
  [0, 1, 3, 1, 0, 12].forEach((value, i) => view.setUint16(2 * i, value));
  const power = Math.floor(Math.log2(count));
  const head = [4, size, 0, 2 * count, 2 * 2 ** power, power, 2 * (count - 2 ** power)];
  head.forEach((value, i) => view.setUint16(12 + 2 * i, value));
  for (let i = 0; i < count; i++) {
    const code = codes[i] ?? 0xffff;
    const delta = i < codes.length ? glyphs[i]! - code : 1;
    view.setUint16(26 + 2 * i, code);
    view.setUint16(28 + 2 * count + 2 * i, code);
    view.setUint16(28 + 4 * count + 2 * i, delta & 0xffff);
  }
  return bytes;
}

function longOffsets(head: Uint8Array): Uint8Array {
  const copy = head.slice();
  viewOf(copy).setInt16(50, 1);
  return copy;
}

/** Format 3: no glyph names. */
function withoutNames(post: Uint8Array): Uint8Array {
  const copy = post.slice(0, 32);
  viewOf(copy).setUint32(0, 0x00030000);
  return copy;
}

function packWoff(tables: readonly (readonly [tag: string, data: Uint8Array])[]): Uint8Array {
  const packed = tables.map(([tag, data]) => {
    const small = deflateSync(data, { level: 9 });
    const body: Uint8Array = small.length < data.length ? small : data;
    return { tag, data, body };
  });
  let at = 44 + 20 * packed.length;
  const directory = packed.map(({ tag, data, body }) => {
    const entry = new Uint8Array(20);
    entry.set(new TextEncoder().encode(tag));
    [at, body.length, data.length, checksum(data)].forEach((value, i) => {
      viewOf(entry).setUint32(4 + 4 * i, value);
    });
    at += padded(body.length);
    return entry;
  });
  const header = new Uint8Array(44);
  const view = viewOf(header);
  const plain = packed.reduce(
    (sum, { data }) => sum + padded(data.length),
    12 + 16 * packed.length,
  );
  view.setUint32(0, 0x774f4646); // wOFF
  view.setUint32(4, 0x00010000); // TrueType outlines
  view.setUint32(8, at);
  view.setUint16(12, packed.length);
  view.setUint32(16, plain);
  view.setUint16(20, 1);
  const bodies = packed.map(({ body }) => {
    const block = new Uint8Array(padded(body.length));
    block.set(body);
    return block;
  });
  return join([header, ...directory, ...bodies]);
}

function padded(length: number): number {
  return (length + 3) & ~3;
}

function checksum(data: Uint8Array): number {
  const block = new Uint8Array(padded(data.length));
  block.set(data);
  const view = viewOf(block);
  let sum = 0;
  for (let i = 0; i < block.length; i += 4) sum = (sum + view.getUint32(i)) >>> 0;
  return sum;
}

function join(parts: readonly Uint8Array[]): Uint8Array {
  const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    bytes.set(part, at);
    at += part.length;
  }
  return bytes;
}
