import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { airToVacuum, factorOfVelocity, vacuumToAir, velocityOfFactor } from "../sky/mod.ts";

/** Letters by which FITS names the variables of spectral axes (Greisen et al. 2006, table 2). */
export type SpectralLetter = "W" | "A" | "F" | "V";

/** What a conversion may need. */
export interface RestOfAxis {
  /** Rest wavelength in vacuum, Å; needed for velocities. */
  readonly rest_angstrom: number;
}

const C_ANGSTROM_HZ = SPEED_OF_LIGHT_KMS.value * 1e13;

/**
 * Vacuum wavelength of a value of a spectral variable: W vacuum wavelength (Å), A wavelength in
 * air (Å), F frequency (Hz), V relativistic velocity (m/s).
 *
 * @param value The value.
 * @param letter Which variable it is.
 * @param rest Rest wavelength, for velocities.
 * @returns Vacuum wavelength, Å.
 *
 * @example
 * ```ts
 * import { toVacuumAngstrom } from "@millrace/millrace/spectra";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(toVacuumAngstrom(5.99584916e14, "F", { rest_angstrom: NaN }), 5000, 1e-6);
 * ```
 */
export function toVacuumAngstrom(
  value: number,
  letter: SpectralLetter,
  rest: RestOfAxis,
): number {
  if (letter === "W") return value;
  if (letter === "A") return airToVacuum(value);
  if (letter === "F") return C_ANGSTROM_HZ / value;
  return rest.rest_angstrom * factorOfVelocity(value / 1000, "relativistic");
}

/**
 * The inverse of {@linkcode toVacuumAngstrom}.
 *
 * @param wavelength_angstrom Vacuum wavelength, Å.
 * @param letter Which variable is wanted.
 * @param rest Rest wavelength, for velocities.
 * @returns The value.
 *
 * @example
 * ```ts
 * import { fromVacuumAngstrom } from "@millrace/millrace/spectra";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(fromVacuumAngstrom(5000, "V", { rest_angstrom: 5000 }), 0, 1e-9);
 * ```
 */
export function fromVacuumAngstrom(
  wavelength_angstrom: number,
  letter: SpectralLetter,
  rest: RestOfAxis,
): number {
  if (letter === "W") return wavelength_angstrom;
  if (letter === "A") return vacuumToAir(wavelength_angstrom);
  if (letter === "F") return C_ANGSTROM_HZ / wavelength_angstrom;
  return 1000 * velocityOfFactor(wavelength_angstrom / rest.rest_angstrom, "relativistic");
}
