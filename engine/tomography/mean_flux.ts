import type { TrailSamples } from "./check_trail.ts";

/** Options of {@linkcode meanFlux}. */
export interface MeanFluxOptions {
  /** Centre of the range counted, km/s. */
  readonly centre_kms: number;
  /** Half the range counted, km/s. */
  readonly half_range_kms: number;
}

/**
 * Equivalent width of the mean profile: for each exposure the sum of flux times pixel over the
 * unmasked samples in range, scaled up for what is masked, averaged over exposures.
 *
 * @param trail Exposures, data, errors.
 * @param options Range in velocity.
 * @returns Flux, km/s; positive in emission.
 *
 * @example
 * ```ts
 * import { meanFlux } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
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
 * const trail = { sampling, flux: Float64Array.of(0, 3, 1), error: Float64Array.of(1, 1, Infinity) };
 * assertEquals(meanFlux(trail, { centre_kms: 0, half_range_kms: 100 }), 90);
 * ```
 */
export function meanFlux(trail: TrailSamples, options: MeanFluxOptions): number {
  const { sampling, flux, error } = trail;
  const { centre_kms, half_range_kms } = options;
  let sum = 0, exposures = 0;
  for (let i = 0; i < sampling.count; i++) {
    let found = 0, seen = 0, all = 0;
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (Math.abs(sampling.velocity_kms[k]! - centre_kms) > half_range_kms) continue;
      const width = sampling.pixel_kms[k]!;
      all += width;
      if (!(error[k]! < Infinity)) continue;
      seen += width;
      found += width * flux[k]!;
    }
    if (seen < 0.5 * all || seen === 0) continue;
    sum += found * all / seen;
    exposures++;
  }
  return exposures === 0 ? NaN : sum / exposures;
}
