import { type DonorLight, kCorrection, kCorrectionRange } from "./k_correction.ts";
import type { InclinationKnowledge, MeasuredValue } from "./mass_input.ts";

/** What is known for the K-correction. */
export interface CentreOptions {
  /** Angle up to which the disc shadows the donor, degrees; null when unknown. */
  readonly disc_shadow_deg?: number | null;
  /** What is known of the inclination. */
  readonly inclination?: InclinationKnowledge | null;
}

/** K2 of the centre of mass, with the range that an unknown shadow leaves. */
export interface DonorCentre extends MeasuredValue {
  /** Both ends, km/s; null when the shadow is known or none matters. */
  readonly range: readonly [low: number, high: number] | null;
}

/** The same at one mass ratio. An unknown shadow counts as an even spread over its range. */
function centreOfMass(
  k: MeasuredValue,
  light: DonorLight,
  options: CentreOptions,
  mass_ratio: number,
): DonorCentre {
  const { disc_shadow_deg: shadow = null, inclination = null } = options;
  const deg = inclination && "deg" in inclination ? inclination.deg.value : 60;
  if (shadow !== null) {
    const factor = kCorrection(mass_ratio, { light, shadow_deg: shadow, inclination_deg: deg });
    return { value: k.value / factor, error: k.error / factor, range: null };
  }
  const { unshadowed, shadowed } = kCorrectionRange(mass_ratio, { light, inclination_deg: deg });
  const ends = [k.value / unshadowed, k.value / shadowed].sort((a, b) => a - b) as [number, number];
  const value = (ends[0] + ends[1]) / 2;
  const spread = (ends[1] - ends[0]) / Math.sqrt(12);
  return { value, error: Math.hypot(k.error * value / k.value, spread), range: ends };
}

/**
 * K2 of the centre of mass, with the mass ratio K1/K2 and the correction made to agree.
 *
 * @param k K of the line.
 * @param light Where the line comes from.
 * @param options Shadow, inclination, K1.
 * @returns K2; null when a correction is needed and K1 is not known.
 */
export function correctedDonor(
  k: MeasuredValue,
  light: DonorLight,
  options: CentreOptions & {
    /** K1, km/s; null when not measured. */
    readonly k_accretor_kms: number | null;
  },
): DonorCentre | null {
  const { k_accretor_kms: k1 } = options;
  if (light === "photosphere") return { ...k, range: null };
  if (k1 === null) return null;
  let mass_ratio = Math.min(2, k1 / k.value);
  for (let round = 0; round < 20; round++) {
    const next = k1 / centreOfMass(k, light, options, mass_ratio).value;
    if (Math.abs(next - mass_ratio) < 1e-4 * mass_ratio) break;
    mass_ratio = (mass_ratio + next) / 2;
  }
  return centreOfMass(k, light, options, mass_ratio);
}
