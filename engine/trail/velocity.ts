import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import type { SpectralLine } from "../sky/mod.ts";

/**
 * Velocity of a wavelength about a line: V = c (λ/λ0 − 1), the optical convention, positive away
 * from the observer.
 *
 * @param wavelength_angstrom Vacuum wavelength, Å.
 * @param line The line whose rest wavelength is meant.
 * @returns Velocity, km/s.
 *
 * @example
 * ```ts
 * import { lineVelocity } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const line = { name: "x", vacuum_angstrom: 5000, air_angstrom: 4998.6, source: "none" };
 * assertAlmostEquals(lineVelocity(5050, line), 2997.92458);
 * ```
 */
export function lineVelocity(wavelength_angstrom: number, line: SpectralLine): number {
  return SPEED_OF_LIGHT_KMS.value * (wavelength_angstrom / line.vacuum_angstrom - 1);
}

/**
 * Wavelength at a velocity about a line: the inverse of {@linkcode lineVelocity}.
 *
 * @param velocity_kms Velocity, km/s, optical convention.
 * @param line The line whose rest wavelength is meant.
 * @returns Vacuum wavelength, Å.
 *
 * @example
 * ```ts
 * import { lineWavelength } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const line = { name: "x", vacuum_angstrom: 5000, air_angstrom: 4998.6, source: "none" };
 * assertAlmostEquals(lineWavelength(2997.92458, line), 5050);
 * ```
 */
export function lineWavelength(velocity_kms: number, line: SpectralLine): number {
  return line.vacuum_angstrom * (1 + velocity_kms / SPEED_OF_LIGHT_KMS.value);
}
