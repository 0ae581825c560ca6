import type { RandomStream } from "../numerics/mod.ts";
import { daysBetween } from "../sky/mod.ts";
import type { InstrumentFaults, PlannedExposure, Variability } from "./observation.ts";

/** What one exposure has of its own, the same in every arm. */
export interface ExposureCourse {
  /** Continuum over its average, flickering and modulation. */
  readonly continuum: number;
  /** Transmission of the slit in the middle of an arm, 0 to 1. */
  readonly transmission: number;
  /** Change of transmission from the middle of an arm to its red end, relative. */
  readonly tilt: number;
  /** Error of the zero of wavelengths: recorded less true velocity, km/s. */
  readonly zero_kms: number;
}

/**
 * The course of continuum, slit losses and wavelength zero. Flickering is red noise: a damped random
 * walk (Kelly, Bechtold & Siemiginowska 2009, ApJ 698, 895) in the logarithm of the continuum, at
 * mid-exposure, with a mean continuum of one.
 */
export function exposureCourses(
  exposures: readonly PlannedExposure[],
  { phases, variability, instrument, stream }: {
    readonly phases: readonly number[];
    readonly variability: Variability;
    readonly instrument: InstrumentFaults;
    readonly stream: RandomStream;
  },
): ExposureCourse[] {
  const { modulation = 0, modulation_phase = 0.85 } = variability;
  const { flickering = 0, flickering_time_s = 600 } = variability;
  const { slit_loss = 0, slit_tilt = 0, drift_kms_per_h = 0, zero_error_kms = 0 } = instrument;
  let walk = 0;
  return exposures.map(({ start }, i) => {
    const gap_s = i === 0 ? Infinity : 86400 * daysBetween(start, exposures[i - 1]!.start);
    const memory = Math.exp(-gap_s / flickering_time_s);
    walk = memory * walk + Math.sqrt(1 - memory * memory) * stream.normal();
    const orbital = 1 + modulation * Math.cos(2 * Math.PI * (phases[i]! - modulation_phase));
    const hours = 24 * daysBetween(start, exposures[0]!.start);
    return {
      continuum: orbital * Math.exp(flickering * walk - flickering * flickering / 2),
      transmission: Math.exp(-slit_loss * Math.abs(stream.normal())),
      tilt: slit_tilt * stream.normal(),
      zero_kms: drift_kms_per_h * hours + zero_error_kms * stream.normal(),
    };
  });
}
