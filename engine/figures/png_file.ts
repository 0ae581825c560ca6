import { crc32, deflateSync } from "node:zlib";
import { type Metadata, SOFTWARE } from "./marks.ts";
import type { RasterSize } from "./raster_size.ts";

/** A raster of colours. */
export interface Raster extends RasterSize {
  /** Colours, rows × columns × 3 bytes, the top row first. */
  readonly rgb: Uint8Array;
}

/** How a PNG file is written. */
export interface PngFileOptions {
  /** Resolution, dots per inch; not stated when absent. */
  readonly dpi?: number;
  /** Facts for its metadata. @default {{}} */
  readonly metadata?: Metadata;
  /** Deflate level, 0 to 9. @default {6} */
  readonly level?: number;
}

/**
 * Writes a raster as a PNG file (RGB, 8 bits) with its resolution and metadata.
 *
 * @param raster The colours.
 * @param options Resolution, metadata, compression.
 * @returns The bytes of the file.
 *
 * @example
 * ```ts
 * import { pngFile } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = pngFile({ columns: 1, rows: 1, rgb: new Uint8Array([255, 0, 0]) }, { dpi: 300 });
 * assertEquals([...bytes.subarray(1, 4)], [0x50, 0x4e, 0x47]);
 * ```
 */
export function pngFile(raster: Raster, options: PngFileOptions = {}): Uint8Array {
  return pngOfLines(scanLines(raster), options);
}

/** A raster as a PNG file has it. */
export interface ScanLines extends RasterSize {
  /**
   * rows × (1 + 3 columns) bytes: each row behind a zero, which says that its bytes are as they are.
   * Flat cells pack best so.
   */
  readonly lines: Uint8Array;
}

/**
 * White paper, to be painted on.
 *
 * @param size Its size.
 * @returns Its rows.
 *
 * @example
 * ```ts
 * import { blankLines } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals([...blankLines({ columns: 1, rows: 2 }).lines], [0, 255, 255, 255, 0, 255, 255, 255]);
 * ```
 */
export function blankLines({ columns, rows }: RasterSize): ScanLines {
  const pitch = 1 + 3 * columns;
  const lines = new Uint8Array(rows * pitch).fill(255);
  for (let row = 0; row < rows; row++) lines[row * pitch] = 0;
  return { columns, rows, lines };
}

/**
 * Writes rows that are laid out already as a PNG file (RGB, 8 bits).
 *
 * @param raster The rows.
 * @param options Resolution, metadata, compression.
 * @returns The bytes of the file.
 *
 * @example
 * ```ts
 * import { blankLines, pngOfLines } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = pngOfLines(blankLines({ columns: 1, rows: 1 }));
 * assertEquals([...bytes.subarray(1, 4)], [0x50, 0x4e, 0x47]);
 * ```
 */
export function pngOfLines(raster: ScanLines, options: PngFileOptions = {}): Uint8Array {
  const { dpi, metadata = {}, level = 6 } = options;
  const facts = Object.entries({ Software: SOFTWARE, ...metadata });
  return concat([
    Uint8Array.of(0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a),
    headerChunk(raster),
    ...(dpi === undefined ? [] : [resolutionChunk(dpi)]),
    ...facts.map(([key, value]) => textChunk(key, value)),
    chunk("IDAT", deflateSync(raster.lines, { level })),
    chunk("IEND", new Uint8Array(0)),
  ]);
}

/** Size, 8 bits a colour, three colours a pixel. */
function headerChunk({ columns, rows }: RasterSize): Uint8Array {
  const data = new Uint8Array(13);
  const view = new DataView(data.buffer);
  view.setUint32(0, columns);
  view.setUint32(4, rows);
  data.set([8, 2], 8);
  return chunk("IHDR", data);
}

function scanLines({ columns, rows, rgb }: Raster): ScanLines {
  const stride = 3 * columns;
  const lines = new Uint8Array(rows * (stride + 1));
  for (let row = 0; row < rows; row++) {
    lines.set(rgb.subarray(row * stride, (row + 1) * stride), row * (stride + 1) + 1);
  }
  return { columns, rows, lines };
}

function resolutionChunk(dpi: number): Uint8Array {
  const data = new Uint8Array(9);
  const view = new DataView(data.buffer);
  view.setUint32(0, Math.round(dpi / 0.0254));
  view.setUint32(4, Math.round(dpi / 0.0254));
  data[8] = 1; // per metre
  return chunk("pHYs", data);
}

function textChunk(key: string, value: string): Uint8Array {
  const encoder = new TextEncoder();
  if (/^[\x20-\x7e\n]*$/.test(value)) return chunk("tEXt", encoder.encode(`${key}\0${value}`));
  const text = deflateSync(encoder.encode(value));
  return chunk("iTXt", concat([encoder.encode(`${key}\0`), new Uint8Array([1, 0, 0, 0]), text]));
}

function chunk(type: string, data: Uint8Array): Uint8Array {
  const body = concat([new TextEncoder().encode(type), data]);
  const bytes = new Uint8Array(body.length + 8);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, data.length);
  bytes.set(body, 4);
  view.setUint32(bytes.length - 4, crc32(body));
  return bytes;
}

function concat(parts: readonly Uint8Array[]): Uint8Array {
  const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    bytes.set(part, at);
    at += part.length;
  }
  return bytes;
}
