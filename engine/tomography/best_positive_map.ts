import { NotConverged } from "../errors.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type EntropyMap, maximumEntropy, type MaximumEntropyOptions } from "./maximum_entropy.ts";

/** A positive map made for a test: converged or not, it is the best there is. */
export interface BestPositiveMap {
  /** The map with its fit. */
  readonly found: EntropyMap;
  /** Whether it reached its goal. */
  readonly reached: boolean;
}

/**
 * The best positive map for a goal, whether the goal can be reached or not.
 *
 * @param trail Exposures, data, errors.
 * @param options Options of {@linkcode maximumEntropy}.
 * @returns The map, and whether it reached the goal.
 *
 * @example
 * ```ts
 * import { bestPositiveMap } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const count = 8, bins = 31;
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
 * const flux = Float64Array.from({ length: count * bins }, (_, k) => 0.1 + Math.cos(k * k));
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const shape = { pixels: 21, half_width_kms: 200, systemic_kms: 0 };
 * assertEquals(bestPositiveMap(trail, shape).reached, false);
 * ```
 */
export function bestPositiveMap(
  trail: TrailSamples,
  options: MaximumEntropyOptions,
): BestPositiveMap {
  try {
    return { found: maximumEntropy(trail, options), reached: true };
  } catch (cause) {
    if (!(cause instanceof NotConverged)) throw cause;
    return { found: cause.partial as EntropyMap, reached: false };
  }
}
