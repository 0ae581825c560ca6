import type { Sampling } from "../trail/mod.ts";
import { InputError } from "../errors.ts";
import { type MapShape, mapStep } from "./map_shape.ts";

/** Full width at half maximum of a Gaussian over its standard deviation: √(8 ln 2). */
const FWHM_PER_SIGMA = Math.sqrt(8 * Math.LN2);

/**
 * Refuses a map whose pixels are wider than half the resolution (FWHM of the sharpest exposure):
 * such a map cannot make a smooth profile.
 *
 * @param sampling Exposures with their profiles.
 * @param shape Pixels along a side and half-width.
 * @throws {InputError} With the number of pixels to use.
 *
 * @example
 * ```ts
 * import { checkResolution } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const error = assertThrows(() => checkResolution(sampling, { pixels: 101, half_width_kms: 1000 }));
 * ```
 */
export function checkResolution(sampling: Sampling, shape: MapShape): void {
  const sharpest = FWHM_PER_SIGMA *
    sampling.profile_sigma_kms.reduce((a, b) => Math.min(a, b), Infinity);
  const step = mapStep(shape);
  // A hair of slack, so that a step of exactly half the FWHM passes whatever the rounding.
  if (step <= 0.5 * sharpest * (1 + 1e-9)) return;
  const needed = 2 * Math.ceil(shape.half_width_kms / (0.5 * sharpest)) + 1;
  throw new InputError({
    action: "make velocity map",
    rule: `a map pixel must be at most half the resolution, ${
      (0.5 * sharpest).toPrecision(4)
    } km/s`,
    value: Number(step.toPrecision(4)),
    unit: "km/s",
    key: "map.pixels",
    remedy: `use at least ${needed} pixels`,
  });
}
