import type { ImageItem } from "./display_list.ts";

/** Size of a raster. */
export interface RasterSize {
  /** Pixels along a row. */
  readonly columns: number;
  /** Rows. */
  readonly rows: number;
}

/**
 * Draws an image's cells on another raster: each new pixel is the mean of the cells under it, by
 * area. Enlarged cells keep sharp edges; reduced ones are averaged, so no cell is lost.
 *
 * @param image The image.
 * @param size The new raster.
 * @returns Colours, rows × columns × 3 bytes, the top row first.
 *
 * @example
 * ```ts
 * import { resampleCells } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const rgb = new Uint8Array([0, 0, 0, 200, 200, 200]);
 * const image = { kind: "image", x: 0, y: 0, width: 2, height: 1, columns: 2, rows: 1, rgb } as const;
 * const wide = resampleCells(image, { columns: 4, rows: 1 });
 * assertEquals([...wide].filter((_, i) => i % 3 === 0), [0, 0, 200, 200]);
 * assertEquals(resampleCells(image, { columns: 1, rows: 1 })[0], 100);
 * ```
 */
export function resampleCells(image: ImageItem, size: RasterSize): Uint8Array {
  const across = shares(image.columns, size.columns);
  const down = shares(image.rows, size.rows);
  const { columns, rgb } = image;
  const wide = new Float32Array(image.rows * size.columns * 3);
  for (let row = 0; row < image.rows; row++) {
    let out = row * size.columns * 3;
    for (const { first, weights } of across) {
      let [r, g, b] = [0, 0, 0];
      let at = (row * columns + first) * 3;
      for (const weight of weights) {
        r += weight * rgb[at++]!;
        g += weight * rgb[at++]!;
        b += weight * rgb[at++]!;
      }
      wide[out++] = r;
      wide[out++] = g;
      wide[out++] = b;
    }
  }
  const stride = size.columns * 3;
  const result = new Uint8Array(size.rows * stride);
  down.forEach((share, row) => {
    const before = down[row - 1];
    const same = share.weights.length === 1 && before?.weights.length === 1 &&
      before.first === share.first;
    if (same) result.copyWithin(row * stride, (row - 1) * stride, row * stride);
    else addRows(wide, { share, into: result.subarray(row * stride, (row + 1) * stride) });
  });
  return result;
}

/** One row of the result: the weighted sum of the rows under it, rounded. */
function addRows(
  wide: Float32Array,
  options: { readonly share: Share; readonly into: Uint8Array },
): void {
  const { share: { first, weights }, into } = options;
  const stride = into.length;
  for (let i = 0; i < stride; i++) {
    let sum = 0.5;
    let at = first * stride + i;
    for (const weight of weights) {
      sum += weight * wide[at]!;
      at += stride;
    }
    into[i] = sum;
  }
}

interface Share {
  readonly first: number;
  readonly weights: number[];
}

/** For each of `to` pixels the cells under it and the part of the pixel that each fills. */
function shares(from: number, to: number): Share[] {
  const step = from / to;
  return Array.from({ length: to }, (_, pixel) => {
    const low = pixel * step;
    const high = Math.min(from, low + step);
    const first = Math.min(from - 1, Math.floor(low + 1e-9));
    const weights: number[] = [];
    for (let cell = first; cell < high - 1e-9; cell++) {
      weights.push((Math.min(cell + 1, high) - Math.max(cell, low)) / (high - low));
    }
    return { first, weights };
  });
}
