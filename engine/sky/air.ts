import { InputError } from "../errors.ts";

/** A published formula for the refractive index of standard air: dry, 15 °C, 101 325 Pa. */
export interface AirFormula {
  /** Where it is published. */
  readonly source: string;
  /**
   * Refractive index.
   *
   * @param vacuum_angstrom Wavelength in vacuum, Å, above 2000.
   */
  index(vacuum_angstrom: number): number;
}

// Both resonance terms below are in wavenumber squared, µm⁻².
function sellmeier(
  source: string,
  constant: number,
  terms: readonly (readonly [strength: number, resonance: number])[],
): AirFormula {
  return {
    source,
    index: (vacuum_angstrom) => {
      const square = (1e4 / vacuum_angstrom) ** 2;
      return terms.reduce((n, [strength, place]) => n + strength / (place - square), 1 + constant);
    },
  };
}

/** Formula of Morton (2000), after Birch & Downs (1994): the one in use throughout Millrace. */
export const MORTON_2000: AirFormula = sellmeier("Morton 2000, ApJS 130, 403", 8.34254e-5, [
  [2.406147e-2, 130],
  [1.5998e-4, 38.9],
]);

/** Formula of Ciddor (1996), for 450 ppm of carbon dioxide; within 1 m/s of Morton (2000) below 1 µm. */
export const CIDDOR_1996: AirFormula = sellmeier("Ciddor 1996, Appl. Opt. 35, 1566", 0, [
  [0.05792105, 238.0185],
  [0.00167917, 57.362],
]);

/** Formula of Edlén (1953) as in Morton (1991): found in older pipelines, 2 to 8 m/s off the others. */
export const MORTON_1991: AirFormula = sellmeier("Morton 1991, ApJS 77, 119", 6.4328e-5, [
  [2.94981e-2, 146],
  [2.5540e-4, 41],
]);

function requireOptical(angstrom: number): void {
  if (angstrom >= 2000 && angstrom < Infinity) return;
  throw new InputError({
    action: "convert between air and vacuum",
    rule: "wavelengths in air are defined from 2000 Å on",
    value: angstrom,
    unit: "Å",
    remedy: "shorter ones are given in vacuum by convention",
  });
}

/**
 * Wavelength in air of a wavelength in vacuum, by a stated formula.
 *
 * @param vacuum_angstrom Wavelength in vacuum, Å, from 2000 on.
 * @param formula Formula of the refractive index.
 * @returns Wavelength in standard air, Å.
 * @throws {InputError} When the wavelength is below 2000 Å or not finite.
 *
 * @example
 * ```ts
 * import { CIDDOR_1996, toAir } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(toAir(6564.6, CIDDOR_1996), 6562.78703, 1e-5);
 * ```
 */
export function toAir(vacuum_angstrom: number, formula: AirFormula): number {
  requireOptical(vacuum_angstrom);
  return vacuum_angstrom / formula.index(vacuum_angstrom);
}

/**
 * Wavelength in vacuum of a wavelength in air, by a stated formula, solved to rounding.
 *
 * @param air_angstrom Wavelength in standard air, Å, from 2000 on.
 * @param formula Formula of the refractive index.
 * @returns Wavelength in vacuum, Å.
 * @throws {InputError} When the wavelength is below 2000 Å or not finite.
 *
 * @example
 * ```ts
 * import { MORTON_1991, toAir, toVacuum } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(toAir(toVacuum(4861.33, MORTON_1991), MORTON_1991), 4861.33, 1e-11);
 * ```
 */
export function toVacuum(air_angstrom: number, formula: AirFormula): number {
  requireOptical(air_angstrom);
  // Each round gains five digits: the index changes by 1e-5 of a change in wavelength.
  let vacuum = air_angstrom;
  for (let i = 0; i < 5; i++) vacuum = air_angstrom * formula.index(vacuum);
  return vacuum;
}

/**
 * Wavelength in standard air of a wavelength in vacuum (Morton 2000).
 *
 * @param vacuum_angstrom Wavelength in vacuum, Å, from 2000 on.
 * @returns Wavelength in air, Å.
 * @throws {InputError} When the wavelength is below 2000 Å or not finite.
 *
 * @example
 * ```ts
 * import { vacuumToAir } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(vacuumToAir(6564.6081), 6562.7951, 1e-4);
 * ```
 */
export function vacuumToAir(vacuum_angstrom: number): number {
  return toAir(vacuum_angstrom, MORTON_2000);
}

/**
 * Wavelength in vacuum of a wavelength in standard air (Morton 2000).
 *
 * @param air_angstrom Wavelength in air, Å, from 2000 on.
 * @returns Wavelength in vacuum, Å.
 * @throws {InputError} When the wavelength is below 2000 Å or not finite.
 *
 * @example
 * ```ts
 * import { airToVacuum } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(airToVacuum(4861.333), 4862.69102, 1e-5);
 * ```
 */
export function airToVacuum(air_angstrom: number): number {
  return toVacuum(air_angstrom, MORTON_2000);
}
