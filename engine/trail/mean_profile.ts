import type { Trail } from "./trail.ts";

/** The mean profile of a trail on its display grid. */
export interface MeanProfile {
  /** Bin centres, C values, km/s. */
  readonly velocity_kms: Float64Array;
  /** Mean of normalised flux minus one, C values; NaN where no exposure has it. */
  readonly flux: Float64Array;
  /** One standard deviation, C values; infinite where no exposure has it. */
  readonly error: Float64Array;
  /** Number of rows averaged. */
  readonly rows: number;
}

/**
 * Averages the rows of a trail with equal weights, so that no phase counts more than another; with
 * `rows` only those.
 *
 * @param trail The trail.
 * @param rows Rows of the grid to average.
 * @returns The mean profile.
 *
 * @example
 * ```ts
 * import { meanProfile } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const grid = {
 *   rows: 2,
 *   columns: 2,
 *   first_kms: -50,
 *   step_kms: 100,
 *   phase: Float64Array.of(0, 0.5),
 *   phase_width: Float64Array.of(0.1, 0.1),
 *   flux: Float64Array.of(1, 2, 3, NaN),
 *   error: Float64Array.of(0.3, 0.3, 0.4, Infinity),
 *   covariance_next: new Float64Array(4),
 * };
 * const mean = meanProfile({ grid });
 * assertEquals([...mean.flux, ...mean.error], [2, 2, 0.25, 0.3]);
 * ```
 */
export function meanProfile(
  trail: Pick<Trail, "grid">,
  rows: readonly number[] = Array.from({ length: trail.grid.rows }, (_, r) => r),
): MeanProfile {
  const { columns, first_kms, step_kms, flux, error } = trail.grid;
  const mean = new Float64Array(columns).fill(NaN);
  const sigma = new Float64Array(columns).fill(Infinity);
  for (let j = 0; j < columns; j++) {
    let sum = 0, variance = 0, count = 0;
    for (const r of rows) {
      const k = r * columns + j;
      if (!Number.isFinite(error[k]!)) continue;
      sum += flux[k]!;
      variance += error[k]! ** 2;
      count++;
    }
    if (count === 0) continue;
    mean[j] = sum / count;
    sigma[j] = Math.sqrt(variance) / count;
  }
  return {
    velocity_kms: Float64Array.from({ length: columns }, (_, j) => first_kms + j * step_kms),
    flux: mean,
    error: sigma,
    rows: rows.length,
  };
}
