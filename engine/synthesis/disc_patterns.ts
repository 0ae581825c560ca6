import type { CompleteModel } from "./model_parameters.ts";

/** A pattern of brightness that turns with the binary: 1 + amplitude · cos m(θ − azimuth(r)). */
export interface DiscPattern {
  /** m. */
  readonly order: number;
  /** Amplitude, 0 to 1. */
  readonly amplitude: number;
  /** Azimuth of a crest, radians from the donor's direction along the orbital motion. */
  readonly azimuth: (radius_over_a: number) => number;
}

/** The patterns of a disc that are not zero. Arms trail: their inner ends are ahead. */
export function discPatterns(disc: CompleteModel["disc"]): DiscPattern[] {
  const radians = Math.PI / 180;
  const winding = 1 / Math.tan(disc.two_armed_pitch_deg * radians);
  const patterns: DiscPattern[] = [
    {
      order: 1,
      amplitude: disc.one_armed_amplitude,
      azimuth: () => disc.one_armed_deg * radians,
    },
    {
      order: 2,
      amplitude: disc.two_armed_amplitude,
      azimuth: (radius) =>
        disc.two_armed_deg * radians + winding * Math.log(disc.outer_radius_over_a / radius),
    },
  ];
  return patterns.filter((pattern) => pattern.amplitude !== 0);
}
