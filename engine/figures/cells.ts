import type { ImageItem } from "./display_list.ts";
import { blankLines, type ScanLines } from "./png_file.ts";
import type { RasterSize } from "./raster_size.ts";

/**
 * Draws an image's cells on another raster: each new pixel is the mean of the cells under it, by
 * area. Enlarged cells keep sharp edges; reduced ones are averaged, so no cell is lost.
 *
 * @param image The image.
 * @param size The new raster.
 * @returns Its rows.
 *
 * @example
 * ```ts
 * import { resampleCells } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const rgb = new Uint8Array([0, 0, 0, 200, 200, 200]);
 * const image = { kind: "image", x: 0, y: 0, width: 2, height: 1, columns: 2, rows: 1, rgb } as const;
 * const { lines } = resampleCells(image, { columns: 4, rows: 1 });
 * assertEquals([...lines].filter((_, i) => i % 3 === 1), [0, 0, 200, 200]);
 * assertEquals(resampleCells(image, { columns: 1, rows: 1 }).lines[1], 100);
 * ```
 */
export function resampleCells(image: ImageItem, size: RasterSize): ScanLines {
  const { columns, rows } = size;
  const canvas = blankLines(size);
  paintCells(canvas, image, { x: 0, y: 0, width: columns, height: rows });
  return canvas;
}

/** Where cells are painted, in pixels of the canvas; edges may lie within pixels. */
export interface CellPlace {
  /** Left edge. */
  readonly x: number;
  /** Top edge. */
  readonly y: number;
  /** Width. */
  readonly width: number;
  /** Height. */
  readonly height: number;
  /** What of it is seen; all of it when absent. */
  readonly cover?: Coverage;
}

/** Part of each pixel of a box that may be painted. */
export interface Coverage extends RasterSize {
  /** First column of the box on the canvas. */
  readonly left: number;
  /** First row of the box on the canvas. */
  readonly top: number;
  /** 0 to 1, rows × columns. */
  readonly parts: Float32Array;
}

/**
 * Paints an image's cells over a canvas: each pixel takes the mean of the cells under it, by area, as
 * far as they cover it.
 *
 * @param canvas What is painted on; its colours change.
 * @param image The cells.
 * @param place Where they come to lie.
 *
 * @example
 * ```ts
 * import { blankLines, paintCells } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const canvas = blankLines({ columns: 3, rows: 1 });
 * const rgb = new Uint8Array([55, 0, 0]);
 * const image = { kind: "image", x: 0, y: 0, width: 1, height: 1, columns: 1, rows: 1, rgb } as const;
 * paintCells(canvas, image, { x: 0.5, y: 0, width: 1.5, height: 1 });
 * assertEquals([...canvas.lines].filter((_, i) => i % 3 === 1), [155, 55, 255]);
 * ```
 */
export function paintCells(canvas: ScanLines, image: ImageItem, place: CellPlace): void {
  const { columns, rows, lines } = canvas;
  const across = shares(image.columns, { from: place.x, length: place.width, pixels: columns });
  const down = shares(image.rows, { from: place.y, length: place.height, pixels: rows });
  const cells = new Float32Array(image.columns * 3);
  const line = new Uint8Array(across.pixels * 3);
  const parts = new Float32Array(across.pixels);
  let kept = -1; // the one row of cells that `line` holds
  for (let j = 0; j < down.pixels; j++) {
    const only = down.cells[j] === 1 ? down.first[j]! : -1;
    if (only < 0 || only !== kept) {
      meanOfRows(image, down, { row: j, into: cells });
      meanOfColumns(cells, across, line);
    }
    kept = only;
    const row = down.low + j;
    for (let i = 0; i < parts.length; i++) parts[i] = across.covered[i]! * down.covered[j]!;
    if (place.cover) dim(parts, place.cover, { row, column: across.low });
    blend(lines, line, { at: row * (1 + 3 * columns) + 1 + 3 * across.low, parts });
  }
}

/** Takes from the parts of a row of pixels what may not be painted. */
function dim(
  parts: Float32Array,
  cover: Coverage,
  place: { readonly row: number; readonly column: number },
): void {
  const row = place.row - cover.top;
  const shift = place.column - cover.left;
  const inside = row >= 0 && row < cover.rows;
  for (let i = 0; i < parts.length; i++) {
    const column = i + shift;
    const seen = inside && column >= 0 && column < cover.columns;
    parts[i]! *= seen ? cover.parts[row * cover.columns + column]! : 0;
  }
}

/** Lays a line of colours over pixels, each by its part; whole pixels are copied in one go. */
function blend(
  lines: Uint8Array,
  line: Uint8Array,
  options: { readonly at: number; readonly parts: Float32Array },
): void {
  const { at, parts } = options;
  for (let i = 0; i < parts.length; i++) {
    const part = parts[i]!;
    if (part === 1) {
      let end = i + 1;
      while (parts[end] === 1) end++;
      lines.set(line.subarray(3 * i, 3 * end), at + 3 * i);
      i = end - 1;
    } else if (part > 0) {
      for (let k = 3 * i; k < 3 * i + 3; k++) {
        lines[at + k] = part * line[k]! + (1 - part) * lines[at + k]! + 0.5;
      }
    }
  }
}

/** The weighted means of the cells under each pixel of a row, rounded. */
function meanOfColumns(cells: Float32Array, across: Shares, line: Uint8Array): void {
  const { first, cells: counts, weights: { start, value } } = across;
  for (let i = 0, out = 0; i < across.pixels; i++) {
    let r = 0.5, g = 0.5, b = 0.5;
    const from = start[i]!;
    const end = from + counts[i]!;
    for (let k = from, at = 3 * first[i]!; k < end; k++, at += 3) {
      const weight = value[k]!;
      r += weight * cells[at]!;
      g += weight * cells[at + 1]!;
      b += weight * cells[at + 2]!;
    }
    line[out++] = r;
    line[out++] = g;
    line[out++] = b;
  }
}

/** The weighted mean of the rows of cells under one row of pixels. */
function meanOfRows(
  image: ImageItem,
  down: Shares,
  options: { readonly row: number; readonly into: Float32Array },
): void {
  const { row, into } = options;
  const { rgb } = image;
  const stride = into.length;
  const from = down.weights.start[row]!;
  const end = from + down.cells[row]!;
  into.fill(0);
  for (let k = from, at = down.first[row]! * stride; k < end; k++, at += stride) {
    const weight = down.weights.value[k]!;
    for (let i = 0; i < stride; i++) into[i]! += weight * rgb[at + i]!;
  }
}

/** Along one axis: which cells lie under each pixel, and with which weight. */
interface Shares {
  /** Number of pixels that cells lie under. */
  readonly pixels: number;
  /** The first of them. */
  readonly low: number;
  /** Part of each pixel that cells cover. */
  readonly covered: Float64Array;
  /** First cell under each pixel. */
  readonly first: Int32Array;
  /** Number of cells under each pixel. */
  readonly cells: Int32Array;
  /** Weights of the cells, those of a pixel together from its start and with a sum of one. */
  readonly weights: { readonly start: Int32Array; readonly value: Float64Array };
}

/** Below this part of a cell a rounding error is not a piece of the next one. */
const TINY = 1e-9;

function shares(
  count: number,
  options: { readonly from: number; readonly length: number; readonly pixels: number },
): Shares {
  const { from, length } = options;
  const low = Math.max(0, Math.floor(from + TINY));
  const pixels = Math.max(0, Math.min(options.pixels, Math.ceil(from + length - TINY)) - low);
  const covered = new Float64Array(pixels);
  const first = new Int32Array(pixels);
  const cells = new Int32Array(pixels);
  const start = new Int32Array(pixels);
  const value: number[] = [];
  const step = count / length; // cells in a pixel
  for (let i = 0; i < pixels; i++) {
    const left = Math.max(from, low + i);
    const right = Math.min(from + length, low + i + 1);
    const begin = (left - from) * step;
    const end = Math.min(count, (right - from) * step);
    covered[i] = right - left > 1 - TINY ? 1 : right - left;
    first[i] = Math.min(count - 1, Math.floor(begin + TINY));
    start[i] = value.length;
    for (let cell = first[i]!; cell < end - TINY; cell++) {
      value.push((Math.min(cell + 1, end) - Math.max(cell, begin)) / (end - begin));
    }
    cells[i] = value.length - start[i]!;
  }
  return {
    pixels,
    low,
    covered,
    first,
    cells,
    weights: { start, value: Float64Array.from(value) },
  };
}
