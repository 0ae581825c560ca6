const ANGSTROM_IN: Readonly<Record<string, number>> = {
  "angstrom": 1,
  "angstroms": 1,
  "ang": 1,
  "a": 1,
  "å": 1,
  "0.1 nm": 1,
  "nm": 10,
  "nanometer": 10,
  "nanometers": 10,
  "nanometre": 10,
  "nanometres": 10,
  "um": 1e4,
  "µm": 1e4,
  "micron": 1e4,
  "microns": 1e4,
  "micrometer": 1e4,
  "mm": 1e7,
  "cm": 1e8,
  "m": 1e10,
  "meter": 1e10,
  "meters": 1e10,
};

/**
 * Ångström in a unit of length, by its name as files write it.
 *
 * @param unit Name of the unit, in any case.
 * @returns Ångström in one unit; null when the name is not known.
 *
 * @example
 * ```ts
 * import { angstromIn } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(["Angstrom", "nm", "furlong"].map(angstromIn), [1, 10, null]);
 * ```
 */
export function angstromIn(unit: string): number | null {
  return ANGSTROM_IN[unit.trim().toLowerCase()] ?? null;
}

/**
 * The unit that optical wavelengths of some size must be in, when none is stated: ångström above
 * 1000, nanometre from 100, micrometre from 0.1, metre below 10⁻⁴. From 1000 to 3000 nanometres
 * would be infrared: ångström is taken.
 *
 * @param wavelength A typical wavelength in the unknown unit.
 * @returns Name of the unit; null when the size fits none.
 *
 * @example
 * ```ts
 * import { unitBySize } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals([4861, 486.1, 0.4861, 4.861e-7, 5].map(unitBySize), ["angstrom", "nm", "um", "m", "um"]);
 * ```
 */
export function unitBySize(wavelength: number): string | null {
  if (wavelength >= 1000 && wavelength < 1e6) return "angstrom";
  if (wavelength >= 100 && wavelength < 1000) return "nm";
  if (wavelength >= 0.1 && wavelength < 30) return "um";
  if (wavelength > 1e-8 && wavelength < 1e-4) return "m";
  return null;
}
