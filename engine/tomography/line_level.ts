import { InputError } from "../errors.ts";
import { makeGrid } from "../trail/mod.ts";
import { backProject } from "./back_projection.ts";
import type { BlendMember } from "./blend_projector.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type MapShape, mapStep } from "./map_shape.ts";
import { meanFlux } from "./mean_flux.ts";

/** What the level of a line and the start of an inversion depend on. */
export interface LineLevelOptions extends MapShape {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /**
   * Other members of a blend that share the map.
   *
   * @default {[]}
   */
  readonly blends?: readonly BlendMember[];
  /**
   * Whether the data have their sign turned already, for a line in absorption.
   *
   * @default {false}
   */
  readonly absorption?: boolean;
}

/**
 * Intensity of a uniform map with the line's mean flux.
 *
 * @param trail Exposures, data (with their sign turned for absorption), errors.
 * @param options Map's shape, systemic velocity, blend.
 * @returns Level, normalised flux × km/s per (km/s)².
 * @throws {InputError} When the mean flux is not positive.
 *
 * @example
 * ```ts
 * import { lineLevel } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 3),
 *   velocity_kms: Float64Array.of(-20, 0, 20),
 *   pixel_kms: Float64Array.of(20, 20, 20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const trail = { sampling, flux: Float64Array.of(0, 3, 0), error: Float64Array.of(1, 1, 1) };
 * const level = lineLevel(trail, { pixels: 3, half_width_kms: 30, systemic_kms: 0 });
 * assertAlmostEquals(level, 60 / 90 ** 2, 1e-12);
 * ```
 */
export function lineLevel(trail: TrailSamples, options: LineLevelOptions): number {
  const { half_width_kms, systemic_kms, pixels, absorption = false } = options;
  const flux = meanFlux(trail, { centre_kms: systemic_kms, half_range_kms: half_width_kms });
  if (!(flux > 0)) {
    throw new InputError({
      action: "make velocity map",
      rule: absorption
        ? "a line inverted with its sign turned must be in absorption on the whole"
        : "a line inverted as it is must be in emission on the whole",
      value: Number(((absorption ? -1 : 1) * flux).toPrecision(4)),
      unit: "km/s mean equivalent width",
      remedy: absorption
        ? "invert it as it is"
        : "invert it with its sign turned, or give the level of the map",
    });
  }
  return flux / sharesOf(options) / (pixels * mapStep(options)) ** 2;
}

/**
 * Intensity of a uniform map whose profile is as strong as the data are in the root mean square, noise
 * taken out: how large the values of a signed map may be.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, blend.
 * @returns Level, positive.
 *
 * @example
 * ```ts
 * import { lineAmplitude } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 2),
 *   velocity_kms: Float64Array.of(-10, 10),
 *   pixel_kms: Float64Array.of(20, 20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const trail = { sampling, flux: Float64Array.of(-5, 5), error: Float64Array.of(3, 3) };
 * const level = lineAmplitude(trail, { pixels: 3, half_width_kms: 20, systemic_kms: 0 });
 * assertAlmostEquals(level, 4 * 40 / 60 ** 2, 1e-12);
 * ```
 */
export function lineAmplitude(trail: TrailSamples, options: LineLevelOptions): number {
  const { sampling, flux, error } = trail;
  const { half_width_kms, systemic_kms, pixels } = options;
  let signal = 0, noise = 0, count = 0;
  flux.forEach((f, k) => {
    if (Math.abs(sampling.velocity_kms[k]! - systemic_kms) > half_width_kms) return;
    if (!(error[k]! < Infinity)) return;
    signal += f * f;
    noise += error[k]! ** 2;
    count++;
  });
  // With nothing but noise, a tenth of it.
  const mean = Math.max(signal - noise, 0.01 * noise) / count;
  return Math.sqrt(mean) * 2 * half_width_kms / sharesOf(options) /
    (pixels * mapStep(options)) ** 2;
}

/**
 * Filtered back-projection of native samples, put on a uniform grid first: where inversions start.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, blend.
 * @returns Pixels² values of either sign.
 *
 * @example
 * ```ts
 * import { backProjectedSamples } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const count = 4, bins = 31;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 15)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const flux = new Float64Array(count * bins);
 * const trail = { sampling, flux, error: flux.map(() => 1) };
 * const start = backProjectedSamples(trail, { pixels: 5, half_width_kms: 100, systemic_kms: 0 });
 * assertEquals(start, new Float64Array(25));
 * ```
 */
export function backProjectedSamples(
  trail: TrailSamples,
  options: LineLevelOptions,
): Float64Array {
  const { half_width_kms, systemic_kms, pixels } = options;
  const grid = makeGrid(trail.sampling, trail, {
    reach_kms: 1.2 * half_width_kms + Math.abs(systemic_kms),
  });
  const { intensity } = backProject({ grid }, { pixels, half_width_kms, systemic_kms });
  const shares = sharesOf(options);
  return intensity.map((f) => f / shares);
}

function sharesOf({ blends = [] }: LineLevelOptions): number {
  return blends.reduce((sum, member) => sum + member.flux_ratio, 1);
}
