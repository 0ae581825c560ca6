import { type MapShape, mapStep } from "./map_shape.ts";
import type { ProfileRows } from "./profile_filter.ts";
import { slantGeometry } from "./slant_geometry.ts";

/**
 * Sums profiles over a map, each smeared along its direction: the value of every profile at the
 * velocity of every pixel, interpolated by cubics onto a grid finer than the pixels and linearly
 * from there.
 *
 * @param rows Profiles in the system's frame, with the velocity of their first bin and their phases.
 * @param shape Map's shape.
 * @returns Sums, pixels², rows of increasing Vy.
 *
 * @example A constant profile gives its value everywhere
 * ```ts
 * import { gatherLines } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const rows = {
 *   rows: 1,
 *   columns: 101,
 *   step_kms: 10,
 *   first_kms: -500,
 *   phase: Float64Array.of(0.2),
 *   flux: new Float64Array(101).fill(3),
 * };
 * const map = gatherLines(rows, { pixels: 5, half_width_kms: 100 });
 * assertAlmostEquals(map[7] ?? NaN, 3, 1e-12);
 * ```
 */
export function gatherLines(
  rows: ProfileRows & { readonly first_kms: number; readonly phase: Float64Array },
  shape: MapShape,
): Float64Array {
  const { pixels } = shape;
  const over = Math.min(4, Math.max(2, Math.ceil(2 * mapStep(shape) / rows.step_kms)));
  const along = [new Float64Array(pixels * pixels), new Float64Array(pixels * pixels)] as const;
  const strand = Math.ceil(2 * over * (pixels + 2) / over) + 4;
  const value = new Float64Array(over * strand), rise = new Float64Array(over * strand);
  for (let j = 0; j < rows.rows; j++) {
    const line = slantGeometry(rows.phase[j]!, { ...shape, over, margin: 1 });
    const q = interpolator(rows, j);
    const length = Math.ceil(line.last) + 2;
    let here = q(line.zero_kms);
    for (let n = 0; n < length; n++) {
      const next = q(line.zero_kms + (n + 1) * line.grid_step_kms);
      const turn = Math.floor(n / over);
      const at = (n - turn * over) * strand + turn;
      value[at] = here;
      rise[at] = next - here;
      here = next;
    }
    const map = along[line.axis];
    for (let l = 0; l < pixels; l++) {
      const u = line.u0 + l * line.du;
      const start = Math.floor(u), p = u - start;
      const turn = Math.floor(start / over);
      const at = (start - turn * over) * strand + turn, from = l * pixels;
      for (let i = 0; i < pixels; i++) {
        map[from + i] = map[from + i]! + (value[at + i]! + p * rise[at + i]!);
      }
    }
  }
  const [map, turned] = along;
  return map.map((m, k) => m + turned[(k % pixels) * pixels + Math.floor(k / pixels)]!);
}

/** One profile as a function of velocity: cubic Lagrange on the four bins around, zero outside. */
function interpolator(
  rows: ProfileRows & { readonly first_kms: number },
  row: number,
): (v: number) => number {
  const { columns, first_kms, step_kms, flux } = rows;
  const from = row * columns;
  const bin = (k: number) => k < 0 || k >= columns ? 0 : flux[from + k]!;
  return (v) => {
    const at = (v - first_kms) / step_kms;
    const k = Math.floor(at);
    if (k < -1 || k >= columns) return 0;
    const p = at - k;
    const a = bin(k - 1), b = bin(k), c = bin(k + 1), d = bin(k + 2);
    return b +
      p *
        (0.5 * (c - a) + p * (a - 2.5 * b + 2 * c - 0.5 * d + p * (1.5 * (b - c) + 0.5 * (d - a))));
  };
}
