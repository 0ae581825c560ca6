import type { Trail } from "../trail/mod.ts";

/** One exposure of a line on its own pixels. */
export interface LineProfile {
  /** Pixel centres, N values, increasing, km/s. */
  readonly velocity_kms: Float64Array;
  /** Pixel widths, N values, km/s. */
  readonly pixel_kms: Float64Array;
  /** Normalised flux minus one, N values. */
  readonly flux: Float64Array;
  /** One standard deviation, N values; infinite where masked. */
  readonly error: Float64Array;
}

/**
 * One exposure of a trail. Its errors grow by the root of the noise's correlation length, so that
 * sums over pixels get the right error.
 *
 * @param trail The trail.
 * @param exposure Index of the exposure, from 0.
 * @returns Its pixels.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { exposureProfile } from "@millrace/millrace/orbit";
 *
 * function widest(trail: Trail): number {
 *   return Math.max(...exposureProfile(trail, 0).pixel_kms);
 * }
 * ```
 */
export function exposureProfile(trail: Trail, exposure: number): LineProfile {
  const { start, velocity_kms, pixel_kms } = trail.sampling;
  const [from, to] = [start[exposure]!, start[exposure + 1]!];
  const growth = Math.sqrt(Math.max(1, trail.noise.correlation_length_pixels));
  return {
    velocity_kms: velocity_kms.subarray(from, to),
    pixel_kms: pixel_kms.subarray(from, to),
    flux: trail.flux.subarray(from, to),
    error: trail.error.slice(from, to).map((e) => e * growth),
  };
}

/**
 * Mean profile of a trail on a uniform grid, weighted by 1/σ²: for choosing windows, not for
 * measuring.
 *
 * @param trail The trail.
 * @returns Velocities, flux and error; velocities without data are left out.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { meanProfile } from "@millrace/millrace/orbit";
 *
 * function peak(trail: Trail): number {
 *   return Math.max(...meanProfile(trail).flux);
 * }
 * ```
 */
export function meanProfile(trail: Trail): LineProfile {
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
