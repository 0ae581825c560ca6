/**
 * How the orbit was sampled: for every exposure its phase, its width in phase, its native pixels
 * and its instrumental profile. It holds all that a projector needs beside the systemic velocity.
 */
export interface Sampling {
  /** Number of exposures, P. */
  readonly count: number;
  /** Orbital phase at mid-exposure, P values in [0, 1), cycles; 0 is the donor's inferior conjunction. */
  readonly phase: Float64Array;
  /** Cycle number at mid-exposure, P integers: `cycle + phase` is time since the zero in orbits. */
  readonly cycle: Float64Array;
  /** Duration of each exposure in cycles, P values. */
  readonly phase_width: Float64Array;
  /** P + 1 offsets: exposure i owns samples `start[i]` up to, not including, `start[i + 1]`. */
  readonly start: Uint32Array;
  /**
   * Velocity of each native pixel's centre, km/s, exposures one after another, increasing within
   * each: V = c (λ/λ0 − 1), barycentric, the systemic velocity still in it.
   */
  readonly velocity_kms: Float64Array;
  /** Width of each native pixel, km/s, same layout. */
  readonly pixel_kms: Float64Array;
  /** Standard deviation of the instrumental profile (pixel included), km/s, P values. */
  readonly profile_sigma_kms: Float64Array;
}
