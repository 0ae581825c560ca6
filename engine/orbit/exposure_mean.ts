import type { Trail } from "../trail/mod.ts";
import type { LineProfile } from "./line_profile.ts";

/**
 * Mean profile of a trail on a uniform grid, weighted by 1/σ²: for choosing windows, not for
 * measuring.
 *
 * @param trail The trail.
 * @returns Velocities, flux and error; velocities without data are left out.
 */
export function exposureMean(trail: Trail): LineProfile {
  const { rows, columns, first_kms, step_kms, flux, error } = trail.grid;
  const found = { velocity: [] as number[], flux: [] as number[], error: [] as number[] };
  for (let c = 0; c < columns; c++) {
    let weight = 0, sum = 0;
    for (let r = 0; r < rows; r++) {
      const e = error[r * columns + c]!;
      if (!(e > 0 && e < Infinity)) continue;
      weight += 1 / (e * e);
      sum += flux[r * columns + c]! / (e * e);
    }
    if (weight === 0) continue;
    found.velocity.push(first_kms + c * step_kms);
    found.flux.push(sum / weight);
    found.error.push(1 / Math.sqrt(weight));
  }
  return {
    velocity_kms: Float64Array.from(found.velocity),
    pixel_kms: new Float64Array(found.velocity.length).fill(step_kms),
    flux: Float64Array.from(found.flux),
    error: Float64Array.from(found.error),
  };
}
