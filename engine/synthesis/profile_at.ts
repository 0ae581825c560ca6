import type { Binary } from "../binary/mod.ts";
import type { Model } from "./model.ts";
import { synthesize } from "./synthesize.ts";

/** Options of {@linkcode profileAt}. */
export interface ProfileOptions {
  /** The binary. */
  readonly binary: Binary;
  /** Orbital phase, cycles; 0 is the donor's inferior conjunction. */
  readonly phase: number;
  /** Velocities at which the profile is wanted, increasing, km/s. */
  readonly velocity_kms: Float64Array;
  /** Standard deviation of the instrumental profile, km/s, positive. */
  readonly sigma_kms: number;
  /**
   * Systemic velocity γ, km/s.
   *
   * @default {0}
   */
  readonly systemic_kms?: number;
}

/**
 * A model's profile at one phase, through a Gaussian instrument and without smearing: one row of
 * {@linkcode synthesize}.
 *
 * @param model The model; with one part, that part's profile.
 * @param options The binary, the phase and the velocities.
 * @returns Normalised flux minus one at each velocity.
 * @throws {InputError} As {@linkcode synthesize}.
 *
 * @example A disc is as bright on the blue side as on the red
 * ```ts
 * import { profileAt } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const velocity_kms = Float64Array.of(-600, 600);
 * const [blue, red] = profileAt({ parts: ["disc"] }, { binary, phase: 0, velocity_kms, sigma_kms: 40 });
 * assertAlmostEquals(blue!, red!, 1e-12);
 * ```
 */
export function profileAt(model: Model, options: ProfileOptions): Float64Array {
  const { binary, phase, velocity_kms, sigma_kms, systemic_kms = 0 } = options;
  return synthesize(model, {
    binary,
    systemic_kms,
    sampling: {
      count: 1,
      phase: Float64Array.of(phase - Math.floor(phase)),
      cycle: Float64Array.of(Math.floor(phase)),
      phase_width: Float64Array.of(0),
      start: Uint32Array.of(0, velocity_kms.length),
      velocity_kms,
      pixel_kms: new Float64Array(velocity_kms.length),
      profile_sigma_kms: Float64Array.of(sigma_kms),
    },
  });
}
