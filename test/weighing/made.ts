// What the tests of this room share: a binary, and data that are quick to fit.
import { binaryFrom } from "@millrace/millrace/binary";
import type { Model } from "@millrace/millrace/synthesis";
import {
  simulateTrail,
  type SimulateTrailOptions,
  type WeighableTrail,
} from "@millrace/millrace/weighing";

/** A dwarf nova's geometry, invented. */
export const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320, inclination_deg: 70 });

/** A line of 60 Å equivalent width at H beta, km/s. */
export const WIDTH = 3700;

/** A line with some of its light in a spot. */
export function spotted(fraction: number): Model {
  return {
    parts: fraction > 0 ? ["disc", "spot"] : ["disc"],
    disc: { equivalent_width_kms: WIDTH * (1 - fraction) },
    spot: { equivalent_width_kms: WIDTH * fraction, mixing: 0.4, sigma_kms: 60 },
  };
}

/** A trail of 30 exposures with coarse pixels: some 2400 samples. */
export function quick(
  model: Model,
  options: Partial<SimulateTrailOptions> = {},
): WeighableTrail {
  return simulateTrail(model, { binary, exposures: 30, pixel_kms: 50, ...options });
}

/** Root mean square. */
export function rms(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i]! * values[i]!;
  return Math.sqrt(sum / values.length);
}
