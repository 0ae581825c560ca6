import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";

/**
 * How a velocity is made from f = λ/λ0: optical c(f − 1), radio c(1 − 1/f), relativistic (along the line
 * of sight) c(f² − 1)/(f² + 1), logarithmic c ln f. Millrace uses the optical one throughout.
 */
export type DopplerConvention = "optical" | "radio" | "relativistic" | "logarithmic";

const c = SPEED_OF_LIGHT_KMS.value;

const VELOCITY: Record<DopplerConvention, (factor: number) => number> = {
  optical: (f) => c * (f - 1),
  radio: (f) => c * (1 - 1 / f),
  relativistic: (f) => c * (f - 1) * (f + 1) / (f * f + 1),
  logarithmic: (f) => c * Math.log(f),
};

const FACTOR: Record<DopplerConvention, (velocity_kms: number) => number> = {
  optical: (v) => 1 + v / c,
  radio: (v) => 1 / (1 - v / c),
  relativistic: (v) => Math.sqrt((1 + v / c) / (1 - v / c)),
  logarithmic: (v) => Math.exp(v / c),
};

/**
 * Velocity of a wavelength.
 *
 * @param factor Wavelength over rest wavelength, above 0, both in vacuum.
 * @param convention How the velocity is made of it.
 * @default convention "optical"
 * @returns Velocity, km/s, positive away from the observer.
 * @throws {InputError} When the factor is not positive and finite.
 *
 * @example
 * ```ts
 * import { velocityOfFactor } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(velocityOfFactor(1.001), 299.792458, 1e-9);
 * assertAlmostEquals(velocityOfFactor(1.001, "radio"), 299.492965, 1e-6);
 * ```
 */
export function velocityOfFactor(
  factor: number,
  convention: DopplerConvention = "optical",
): number {
  if (!(factor > 0 && factor < Infinity)) {
    throw new InputError({
      action: "find velocity",
      rule: "the ratio of wavelengths must be positive and finite",
      value: factor,
    });
  }
  return VELOCITY[convention](factor);
}

/**
 * Wavelength over rest wavelength of a velocity. Velocities of two frames do not add; these factors multiply.
 *
 * @param velocity_kms Velocity, km/s, positive away from the observer.
 * @param convention How the velocity was made.
 * @default convention "optical"
 * @returns The factor, above 0.
 * @throws {InputError} When no wavelength has such a velocity.
 *
 * @example
 * ```ts
 * import { factorOfVelocity, velocityOfFactor } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // The optical velocity of what a relativistic formula calls −4037.58 km/s.
 * const optical = velocityOfFactor(factorOfVelocity(-4037.58, "relativistic"));
 * assertAlmostEquals(optical, -4010.75, 0.01);
 * ```
 */
export function factorOfVelocity(
  velocity_kms: number,
  convention: DopplerConvention = "optical",
): number {
  const factor = FACTOR[convention](velocity_kms);
  if (!(factor > 0 && factor < Infinity)) {
    throw new InputError({
      action: "find the ratio of wavelengths",
      rule: `no wavelength has such a velocity in the ${convention} convention`,
      value: velocity_kms,
      unit: "km/s",
    });
  }
  return factor;
}
