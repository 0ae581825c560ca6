import { shiftVelocities, smearingRule, systemFrame } from "../tomography/mod.ts";
import type { Sampling } from "../trail/mod.ts";

/** A compact source in the map. */
export interface CompactSource {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** Standard deviation of its own velocities, km/s. */
  readonly sigma_kms: number;
}

/**
 * The trail of a compact source of unit equivalent width anywhere in the map:
 * V(φ) = γ − Vx cos 2πφ + Vy sin 2πφ, through each exposure's profile and averaged over its duration.
 *
 * @param source Place and width.
 * @param options Exposures, systemic velocity and a shift of the zero of phase.
 * @returns Normalised flux, one value per sample.
 *
 * @example Its light is one
 * ```ts
 * import { compactTrail, simulateTrail } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const { sampling } = simulateTrail({ parts: ["disc"] }, { binary, exposures: 1 });
 * const trail = compactTrail({ vx_kms: -300, vy_kms: 400, sigma_kms: 50 }, { sampling });
 * assertAlmostEquals(trail.reduce((sum, flux) => sum + 20 * flux, 0), 1, 1e-3);
 * ```
 */
export function compactTrail(
  source: CompactSource,
  { sampling, systemic_kms = 0, phase = 0 }: {
    readonly sampling: Sampling;
    readonly systemic_kms?: number;
    readonly phase?: number;
  },
): Float64Array {
  const { vx_kms, vy_kms, sigma_kms } = source;
  const frame = systemFrame(systemic_kms);
  const velocity = shiftVelocities(sampling.velocity_kms, frame);
  const trail = new Float64Array(velocity.length);
  const speed = Math.hypot(vx_kms, vy_kms);
  for (let i = 0; i < sampling.count; i++) {
    const sigma = Math.hypot(sampling.profile_sigma_kms[i]! * frame.factor, sigma_kms);
    const width = sampling.phase_width[i]!;
    const { offset, weight } = smearingRule(width, 2 * Math.PI * width * speed / sigma);
    const peak = 1 / (Math.sqrt(2 * Math.PI) * sigma);
    for (let q = 0; q < offset.length; q++) {
      const angle = 2 * Math.PI * (sampling.phase[i]! + phase + offset[q]!);
      const centre = vy_kms * Math.sin(angle) - vx_kms * Math.cos(angle);
      for (let n = sampling.start[i]!; n < sampling.start[i + 1]!; n++) {
        const z = (velocity[n]! - centre) / sigma;
        if (Math.abs(z) < 6) trail[n]! += weight[q]! * peak * Math.exp(-0.5 * z * z);
      }
    }
  }
  return trail;
}
