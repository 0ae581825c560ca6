import { makeGrid, type Trail } from "../../trail/mod.ts";

/** The straight baselines that were fitted with a map. */
export interface Baselines {
  /** Level at zero velocity, one an exposure, parts of the continuum. */
  readonly level: Float64Array;
  /** Slope, one an exposure, parts of the continuum per 1000 km/s. */
  readonly slope: Float64Array;
}

/**
 * The straight line that a map leaves in each exposure, by weighted least squares.
 *
 * @param trail The trail.
 * @param options What was fitted.
 * @param options.model The map's data on native pixels.
 * @returns The lines; zero for an exposure without samples.
 */
export function fittedBaselines(trail: Trail, options: { model: Float64Array }): Baselines {
  const { model } = options;
  const { sampling, flux, error } = trail;
  const level = new Float64Array(sampling.count), slope = new Float64Array(sampling.count);
  for (let i = 0; i < sampling.count; i++) {
    let w = 0, x = 0, y = 0, xx = 0, xy = 0;
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!(error[k]! < Infinity)) continue;
      const weight = 1 / error[k]! ** 2;
      const v = sampling.velocity_kms[k]! / 1000, left = flux[k]! - model[k]!;
      w += weight;
      x += weight * v;
      y += weight * left;
      xx += weight * v * v;
      xy += weight * v * left;
    }
    const determinant = w * xx - x * x;
    if (!(determinant > 0)) continue;
    slope[i] = (w * xy - x * y) / determinant;
    level[i] = (y - slope[i]! * x) / w;
  }
  return { level, slope };
}

/**
 * A trail less its baselines, samples and display alike.
 *
 * @param trail The trail.
 * @param options What to take off, and how the display is made.
 * @param options.baselines The lines.
 * @param options.reach_kms Reach of the display grid.
 * @param options.phase_bins Rows of the display grid; 0 for every exposure.
 * @returns The trail.
 */
export function withoutBaselines(
  trail: Trail,
  options: { baselines: Baselines; reach_kms: number; phase_bins: number },
): Trail {
  const { baselines: { level, slope }, reach_kms, phase_bins } = options;
  const { sampling, error } = trail;
  const flux = trail.flux.slice();
  for (let i = 0; i < sampling.count; i++) {
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!(error[k]! < Infinity)) continue;
      flux[k] = flux[k]! - level[i]! - slope[i]! * sampling.velocity_kms[k]! / 1000;
    }
  }
  return { ...trail, flux, grid: makeGrid(sampling, { flux, error }, { reach_kms, phase_bins }) };
}
