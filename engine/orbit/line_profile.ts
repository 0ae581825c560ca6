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
