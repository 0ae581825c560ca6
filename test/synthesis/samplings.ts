import type { Sampling } from "@millrace/millrace/trail";
import { type Binary, binaryFrom } from "@millrace/millrace/binary";

/** The binary of the room's tests. */
export const binary: Binary = binaryFrom({
  k_accretor_kms: 70,
  k_donor_kms: 320,
  inclination_deg: 68,
});

/** Exposures at given phases, all with the same uniform pixels and profile. */
export function evenSampling(
  phases: readonly number[],
  { half_kms = 3000, step_kms = 20, sigma_kms = 40, phase_width = 0, middle_kms = 0 }: {
    readonly half_kms?: number;
    readonly step_kms?: number;
    readonly sigma_kms?: number;
    readonly phase_width?: number;
    readonly middle_kms?: number;
  } = {},
): Sampling {
  const half = Math.round(half_kms / step_kms);
  const columns = 2 * half + 1;
  const count = phases.length;
  return {
    count,
    phase: Float64Array.from(phases, (phase) => phase - Math.floor(phase)),
    cycle: Float64Array.from(phases, Math.floor),
    phase_width: new Float64Array(count).fill(phase_width),
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * columns),
    velocity_kms: Float64Array.from(
      { length: count * columns },
      (_, n) => middle_kms + (n % columns - half) * step_kms,
    ),
    pixel_kms: new Float64Array(count * columns).fill(step_kms),
    profile_sigma_kms: new Float64Array(count).fill(sigma_kms),
  };
}

/** Phases evenly over one orbit. */
export function orbit(count: number): number[] {
  return Array.from({ length: count }, (_, i) => i / count);
}

/** One exposure's samples. */
export function row(flux: Float64Array, sampling: Sampling, exposure: number): Float64Array {
  return flux.slice(sampling.start[exposure], sampling.start[exposure + 1]);
}

/** Light (km/s), mean velocity and standard deviation (km/s) of one exposure of even pixels. */
export function moments(
  flux: Float64Array,
  sampling: Sampling,
  exposure: number,
): { light: number; mean: number; sigma: number } {
  let light = 0, first = 0, second = 0;
  for (let n = sampling.start[exposure]!; n < sampling.start[exposure + 1]!; n++) {
    const share = flux[n]! * sampling.pixel_kms[n]!;
    light += share;
    first += share * sampling.velocity_kms[n]!;
    second += share * sampling.velocity_kms[n]! ** 2;
  }
  const mean = first / light;
  return { light, mean, sigma: Math.sqrt(second / light - mean * mean) };
}
