import { type Binary, binaryFrom } from "@millrace/millrace/binary";
import type { RandomStream } from "@millrace/millrace/numerics";
import { type Model, synthesize } from "@millrace/millrace/synthesis";
import type { Sampling, Trail } from "@millrace/millrace/trail";

/** The invented binary of these tests. */
export const binary: Binary = binaryFrom({
  k_accretor_kms: 75,
  k_donor_kms: 340,
  period_d: 0.0823714,
  inclination_deg: 65,
});

/** Exposures of equal length, `per_orbit` of them to the orbit, from phase `from`. */
export function exposures(options: {
  count: number;
  per_orbit?: number;
  reach_kms?: number;
  pixel_kms?: number;
  sigma_kms?: number;
  from?: number;
}): Sampling {
  const { count, per_orbit = 40, reach_kms = 3000, pixel_kms = 20 } = options;
  const { sigma_kms = 35, from = 0 } = options;
  const pixels = 2 * Math.round(reach_kms / pixel_kms) + 1;
  const velocity_kms = new Float64Array(count * pixels);
  for (let n = 0; n < velocity_kms.length; n++) {
    velocity_kms[n] = pixel_kms * (n % pixels - (pixels - 1) / 2);
  }
  const orbits = Float64Array.from({ length: count }, (_, i) => from + (i + 0.5) / per_orbit);
  return {
    count,
    phase: orbits.map((x) => x - Math.floor(x)),
    cycle: orbits.map(Math.floor),
    phase_width: new Float64Array(count).fill(0.9 / per_orbit),
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * pixels),
    velocity_kms,
    pixel_kms: new Float64Array(velocity_kms.length).fill(pixel_kms),
    profile_sigma_kms: new Float64Array(count).fill(sigma_kms),
  };
}

/** A trail of given flux and constant error. */
export function trailOf(
  sampling: Sampling,
  flux: Float64Array,
  options: { error: number; name?: string; vacuum_angstrom?: number },
): Trail {
  const { error, name = "H beta", vacuum_angstrom = 4862.69 } = options;
  const pixels = flux.length / sampling.count;
  const errors = new Float64Array(flux.length).fill(error);
  return {
    line: { name, vacuum_angstrom, air_angstrom: vacuum_angstrom - 1.36, source: "test" },
    sampling,
    flux,
    error: errors,
    grid: {
      rows: sampling.count,
      columns: pixels,
      first_kms: sampling.velocity_kms[0]!,
      step_kms: sampling.pixel_kms[0]!,
      phase: sampling.phase,
      phase_width: sampling.phase_width,
      flux,
      error: errors,
      covariance_next: new Float64Array(flux.length),
    },
    sources: Array.from({ length: sampling.count }, (_, i) => `exposure ${i + 1}`),
    group: new Uint16Array(sampling.count),
    continuum: new Float64Array(sampling.count).fill(1),
    continuum_error: new Float64Array(sampling.count),
    noise_scale: 1,
    noise: { groups: [], correlation_length_pixels: 1 },
    warnings: [],
  };
}

/** The trail of a model without noise, with the errors it is going to have. */
export function modelTrail(
  model: Model,
  sampling: Sampling,
  options: { error: number; systemic_kms?: number },
): Trail {
  const { error, systemic_kms = -15 } = options;
  return trailOf(sampling, synthesize(model, { binary, sampling, systemic_kms }), { error });
}

/** The same trail with normal noise of its errors. */
export function withNoise(trail: Trail, random: RandomStream): Trail {
  const flux = trail.flux.map((f, n) => f + trail.error[n]! * random.normal());
  return { ...trail, flux, grid: { ...trail.grid, flux } };
}

/** The sodium doublet, vacuum Å: 8183.26 and 8194.82 in air. */
export const SODIUM: readonly [number, number] = [8185.51, 8197.07];

/**
 * Absorption lines of a donor: Gaussian components of the instrument's width, broadened by rotation
 * (uniform disc, by sums over 41 strips) and by 15 sub-exposures.
 */
export function donorTrail(sampling: Sampling, options: {
  error: number;
  depth?: number;
  k_kms?: number;
  systemic_kms?: number;
  v_sin_i_kms?: number;
  zero?: number;
  components?: readonly (readonly [vacuum_angstrom: number, strength: number])[];
}): Trail {
  const { error, depth = 0.15, k_kms = 340, systemic_kms = -15, zero = 0 } = options;
  const { v_sin_i_kms = 0, components = SODIUM.map((wave) => [wave, 1] as const) } = options;
  const flux = new Float64Array(sampling.velocity_kms.length);
  const strips = v_sin_i_kms > 0 ? 41 : 1, parts = 15;
  for (let i = 0; i < sampling.count; i++) {
    const sigma = sampling.profile_sigma_kms[i]!;
    for (let part = 0; part < parts; part++) {
      const phase = sampling.phase[i]! + sampling.phase_width[i]! * ((part + 0.5) / parts - 0.5);
      const v = systemic_kms + k_kms * Math.sin(2 * Math.PI * (phase - zero));
      for (let strip = 0; strip < strips; strip++) {
        const x = strips === 1 ? 0 : 2 * (strip + 0.5) / strips - 1;
        const share = strips === 1 ? 1 : 4 / (Math.PI * strips) * Math.sqrt(1 - x * x);
        for (const [wave, strength] of components) {
          const factor = wave / SODIUM[0] * (1 + (v + x * v_sin_i_kms) / 299792.458);
          const centre = 299792.458 * (factor - 1);
          for (let n = sampling.start[i]!; n < sampling.start[i + 1]!; n++) {
            const u = (sampling.velocity_kms[n]! - centre) / sigma;
            if (Math.abs(u) < 7) {
              flux[n]! -= depth * strength * share / parts * Math.exp(-0.5 * u * u);
            }
          }
        }
      }
    }
  }
  return trailOf(sampling, flux, { error, name: "Na I 8190", vacuum_angstrom: SODIUM[0] });
}
