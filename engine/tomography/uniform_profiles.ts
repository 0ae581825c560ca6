import type { TrailGrid } from "../trail/mod.ts";

/** What is used of a trail's uniform grid. */
export type ProfileGrid = Pick<
  TrailGrid,
  "rows" | "columns" | "first_kms" | "step_kms" | "phase" | "flux" | "error"
>;

/** A trail's grid made fit for Fourier methods. */
export interface UniformProfiles {
  /** Values without gaps, rows × columns: bridged linearly within a row, zero beyond its ends. */
  readonly flux: Float64Array;
  /** Mean noise variance of a covered bin, one per row; Infinity where there is none. */
  readonly variance: Float64Array;
  /** Number of covered bins, one per row. */
  readonly covered: Uint32Array;
}

/**
 * Fills what a trail's grid does not cover.
 *
 * @param grid The uniform grid of a trail.
 * @returns Values, mean variances and counts.
 *
 * @example A masked bin is bridged
 * ```ts
 * import { uniformProfiles } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const { flux, covered } = uniformProfiles({
 *   rows: 1,
 *   columns: 4,
 *   first_kms: 0,
 *   step_kms: 10,
 *   phase: Float64Array.of(0),
 *   flux: Float64Array.of(1, NaN, 3, NaN),
 *   error: Float64Array.of(0.1, Infinity, 0.1, Infinity),
 * });
 * assertEquals([...flux], [1, 2, 3, 0]);
 * assertEquals([...covered], [2]);
 * ```
 */
export function uniformProfiles(grid: ProfileGrid): UniformProfiles {
  const { rows, columns } = grid;
  const flux = new Float64Array(rows * columns);
  const variance = new Float64Array(rows);
  const covered = new Uint32Array(rows);
  for (let row = 0; row < rows; row++) {
    let sum = 0, count = 0, last = -1;
    for (let c = 0; c < columns; c++) {
      const k = row * columns + c;
      const error = grid.error[k]!, value = grid.flux[k]!;
      if (!(error > 0 && error < Infinity) || !Number.isFinite(value)) continue;
      sum += error * error;
      count++;
      flux[k] = value;
      if (last >= 0) {
        const before = flux[row * columns + last]!;
        for (let i = last + 1; i < c; i++) {
          flux[row * columns + i] = before + (value - before) * (i - last) / (c - last);
        }
      }
      last = c;
    }
    variance[row] = count > 0 ? sum / count : Infinity;
    covered[row] = count;
  }
  return { flux, variance, covered };
}
