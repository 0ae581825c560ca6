import { lineNamed } from "@millrace/millrace/sky";
import { randomStream } from "@millrace/millrace/numerics";
import { type Observation, observe, planExposures } from "@millrace/millrace/synthesis";
import type { Model } from "@millrace/millrace/synthesis";
import type { RawExposure } from "@millrace/millrace/spectra";
import { binary } from "./samplings.ts";

/** The observation of the room's tests: one arm about H beta, hardly any noise. */
export const observation: Observation = {
  object: "VX-0417",
  target: { ra_deg: 83.1, dec_deg: -12.4 },
  site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
  binary,
  ephemeris: {
    period_d: 0.0823714,
    period_error_d: 0,
    zero: [2460311, 0.62107],
    zero_error_d: 0,
    covariance_d2: 0,
    period_derivative: 0,
    zero_marks: "donor-conjunction",
  },
  systemic_kms: 27,
  exposures: planExposures([2460311, 0.55], { count: 6, exposure_s: 140, overhead_s: 900 }),
  arms: [{
    first_angstrom: 4740,
    step_angstrom: 0.4,
    pixels: 600,
    resolution_angstrom: 1,
    signal_to_noise: 2e4,
  }],
  lines: [{ line: lineNamed("H beta") }],
};

/** Exposures of a model by the seed given. */
export function exposuresOf(
  model: Model,
  changes: Partial<Observation> = {},
  seed = 1,
): RawExposure[] {
  return observe(model, { ...observation, ...changes }, { stream: randomStream(seed) });
}

/** The observation with its arm changed. */
export function withArm(changes: Partial<Observation["arms"][number]>): Partial<Observation> {
  return { arms: [{ ...observation.arms[0]!, ...changes }] };
}

/** Mean. */
export function mean(values: ArrayLike<number>): number {
  return Array.from(values).reduce((a, b) => a + b, 0) / values.length;
}

/** Standard deviation. */
export function deviation(values: ArrayLike<number>): number {
  const middle = mean(values);
  return Math.sqrt(mean(Array.from(values, (value) => (value - middle) ** 2)));
}
