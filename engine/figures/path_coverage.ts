import type { Coverage } from "./cells.ts";
import type { RasterSize } from "./raster_size.ts";

/** Steps in which a curve is walked: a quarter of a circle 700 pixels across is met within 0.03 of one. */
const STEPS = 64;

/**
 * Part of each pixel that lies within an outline: exact areas, from the signed areas to the right of
 * its edges. For outlines that do not cross themselves.
 *
 * @param d Path data of absolute commands (M, L, C, Q, Z).
 * @param options The box of pixels, and pixels per unit of the path.
 * @returns Coverage of the pixels of the box.
 *
 * @example
 * ```ts
 * import { pathCoverage } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const cover = pathCoverage("M0.5,0L2,0L2,1L0.5,1Z", { columns: 3, rows: 1, scale: 1 });
 * assertEquals([...cover.parts], [0.5, 1, 0]);
 * ```
 */
export function pathCoverage(
  d: string,
  options: RasterSize & {
    /** Pixels per unit. */
    readonly scale: number;
    /** Shift of the path before it is scaled. @default {[0, 0]} */
    readonly shift?: readonly [x: number, y: number];
    /** First column of the box. @default {0} */
    readonly left?: number;
    /** First row of the box. @default {0} */
    readonly top?: number;
  },
): Coverage {
  const { columns, rows, scale, shift: [dx, dy] = [0, 0], left = 0, top = 0 } = options;
  // What an edge changes in a pixel, summed along the row, is the coverage.
  const change = new Float32Array(rows * columns + 2);
  const add = edgeAdder(change, { columns, rows });
  let [x0, y0, startX, startY] = [0, 0, 0, 0];
  const to = (x: number, y: number) => {
    add(x0, y0, x, y);
    [x0, y0] = [x, y];
  };
  for (const [, command, numbers] of d.matchAll(/([MLCQZ])([^MLCQZ]*)/g)) {
    const p = (numbers!.match(/-?\d+(?:\.\d+)?/g) ?? []).map((text, i) =>
      i % 2 === 0 ? (Number(text) + dx) * scale - left : (Number(text) + dy) * scale - top
    );
    if (command === "Z") to(startX, startY);
    if (command === "M") {
      to(startX, startY);
      [x0, y0, startX, startY] = [p[0]!, p[1]!, p[0]!, p[1]!];
    }
    if (command === "L") { for (let i = 0; i < p.length; i += 2) to(p[i]!, p[i + 1]!); }
    const size = command === "C" ? 6 : command === "Q" ? 4 : 0;
    for (let i = 0; size > 0 && i < p.length; i += size) {
      const points = [x0, y0, ...p.slice(i, i + size)];
      for (let step = 1; step <= STEPS; step++) to(...bezier(points, step / STEPS));
    }
  }
  to(startX, startY);
  const cover = new Float32Array(rows * columns);
  for (let row = 0; row < rows; row++) {
    let sum = 0;
    for (let at = row * columns; at < (row + 1) * columns; at++) {
      sum += change[at]!;
      const part = Math.abs(sum);
      // Sums of single precision: a pixel that is all but full is full.
      cover[at] = part > 0.9999 ? 1 : part < 0.0001 ? 0 : part;
    }
  }
  return { left, top, columns, rows, parts: cover };
}

/** A point of a Bézier curve, by de Casteljau's rule. */
function bezier(points: readonly number[], t: number): [x: number, y: number] {
  const p = [...points];
  for (let count = p.length; count > 2; count -= 2) {
    for (let i = 0; i < count - 2; i++) p[i]! += t * (p[i + 2]! - p[i]!);
  }
  return [p[0]!, p[1]!];
}

/** Adds an edge's change of coverage, row by row, to the pixels that it passes. */
function edgeAdder(change: Float32Array, { columns, rows }: RasterSize) {
  return (x0: number, y0: number, x1: number, y1: number): void => {
    if (y0 === y1) return;
    const sign = y0 < y1 ? 1 : -1;
    const [xa, ya, xb, yb] = sign > 0 ? [x0, y0, x1, y1] : [x1, y1, x0, y0];
    const slope = (xb - xa) / (yb - ya);
    for (let row = Math.max(0, Math.floor(ya)); row < Math.min(rows, Math.ceil(yb)); row++) {
      const top = Math.max(ya, row);
      const bottom = Math.min(yb, row + 1);
      const height = sign * (bottom - top);
      const clamp = (x: number) => Math.min(columns, Math.max(0, x));
      const a = clamp(xa + slope * (top - ya));
      const b = clamp(xa + slope * (bottom - ya));
      const [left, right] = a < b ? [a, b] : [b, a];
      const at = row * columns;
      let inside = 0; // of the height, what has been given to pixels
      for (let pixel = Math.floor(left); pixel < columns; pixel++) {
        // Area right of the edge within the pixel, over the height.
        const covered = rightOf({ left, right }, pixel);
        change[at + pixel]! += height * (covered - inside);
        inside = covered;
        if (covered === 1) break;
      }
    }
  };
}

/** Mean part of a pixel to the right of an edge that crosses from `left` to `right`. */
function rightOf(edge: { readonly left: number; readonly right: number }, pixel: number): number {
  const { left, right } = edge;
  if (right <= pixel) return 1;
  if (right - left < 1e-9) return Math.max(0, Math.min(1, pixel + 1 - left));
  // The mean over the edge of clamp(pixel + 1 − x, 0, 1).
  const integral = (x: number) => {
    const u = Math.max(0, Math.min(1, pixel + 1 - x));
    return u * u / 2 + Math.max(0, pixel - x);
  };
  return Math.min(1, (integral(left) - integral(right)) / (right - left));
}
