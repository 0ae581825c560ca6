import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import type { SpectralLine } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";

/** Full width at half maximum of a Gaussian over its standard deviation. */
export const FWHM_OVER_SIGMA: number = 2 * Math.sqrt(2 * Math.log(2));

/**
 * Full width at half maximum of an exposure's instrumental profile at a line.
 *
 * @param spectrum The exposure.
 * @param line The line, within the exposure's wavelengths.
 * @returns Width, km/s, pixel included; null when the exposure does not say.
 *
 * @example
 * ```ts
 * import { profileWidth } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const line = { name: "x", vacuum_angstrom: 5000, air_angstrom: 4998.6, source: "none" };
 * const width = profileWidth({
 *   wavelength_angstrom: Float64Array.of(4990, 5010),
 *   resolution_angstrom: Float64Array.of(1, 1),
 * }, line);
 * assertAlmostEquals(width!, 59.96, 0.01);
 * ```
 */
export function profileWidth(
  spectrum: Pick<Spectrum, "wavelength_angstrom" | "resolution_angstrom">,
  line: SpectralLine,
): number | null {
  const { wavelength_angstrom, resolution_angstrom } = spectrum;
  if (resolution_angstrom === null || resolution_angstrom.length === 0) return null;
  const after = wavelength_angstrom.findIndex((w) => w >= line.vacuum_angstrom);
  const i = after < 0 ? wavelength_angstrom.length - 1 : after;
  const width = resolution_angstrom[i]!;
  if (!(width > 0)) return null;
  return SPEED_OF_LIGHT_KMS.value * width / line.vacuum_angstrom;
}
