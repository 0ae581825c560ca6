import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { median, minimise } from "../numerics/mod.ts";
import { nightSkyLines } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import type { ZeroShift } from "./wavelength_zero.ts";

/** Options of {@linkcode measureSkyLines}. */
export interface SkyLineOptions {
  /**
   * Wavelengths of sharp night-sky lines, vacuum, observer's frame, Å.
   * @default the isolated lines of the kept list
   */
  readonly lines_angstrom?: readonly number[];
  /**
   * Half width of the fit about a line, km/s.
   * @default 250
   */
  readonly half_width_kms?: number;
  /**
   * Signal to noise below which a line is not used.
   * @default 10
   */
  readonly faintest?: number;
}

const C = SPEED_OF_LIGHT_KMS.value;
/** Width of a fitted line over that of the instrument beyond which it is none of the sky. */
const WIDEST = 1.6;

// Fits a Gaussian on a sloping background; position and error in km/s about the line.
function fitOne(
  spectrum: Spectrum,
  line: number,
  options: { readonly half: number; readonly faintest: number },
): { readonly shift: number; readonly error: number } | null {
  const { half, faintest } = options;
  const factor = spectrum.observer_factor!;
  const velocity: number[] = [];
  const flux: number[] = [];
  const error: number[] = [];
  spectrum.wavelength_angstrom.forEach((w, i) => {
    const v = C * (w / factor / line - 1);
    if (Math.abs(v) > half || !Number.isFinite(spectrum.flux[i]!)) return;
    if (!Number.isFinite(spectrum.error[i]!)) return;
    velocity.push(v);
    flux.push(spectrum.flux[i]!);
    error.push(spectrum.error[i]!);
  });
  if (velocity.length < 7) return null;
  const level = median(flux);
  const top = flux.indexOf(Math.max(...flux));
  const height = flux[top]! - level;
  if (!(height > 0)) return null;
  const width = spectrum.resolution_angstrom === null
    ? 1.5 * Math.abs(velocity[1]! - velocity[0]!)
    : C * median(spectrum.resolution_angstrom) / line / 2.3548;
  const pixel = Math.abs(velocity[1]! - velocity[0]!);
  const fit = minimise(
    ([amplitude, centre, sigma, base, slope]) =>
      Float64Array.from(
        velocity,
        (v, i) =>
          (amplitude! * height * Math.exp(-0.5 * ((v - centre! * width) / (sigma! * width)) ** 2) +
            base! * height + slope! * height * v / half - (flux[i]! - level)) / error[i]!,
      ),
    Float64Array.of(1, velocity[top]! / width, 1, 0, 0),
    {
      lower: Float64Array.of(0, -half / width, 0.4 * Math.min(1, pixel / width), -10, -10),
      upper: Float64Array.of(10, half / width, 5, 10, 10),
    },
  );
  const [amplitude, centre, sigma] = fit.parameters;
  // Sky lines are as sharp as the instrument draws them; what is broader belongs to the target.
  if (spectrum.resolution_angstrom !== null && sigma! > WIDEST) return null;
  const amplitudeError = Math.sqrt(fit.covariance.get(0, 0));
  const centreError = Math.sqrt(fit.covariance.get(1, 1));
  if (!fit.converged || !(amplitude! > faintest * amplitudeError)) return null;
  return { shift: centre! * width, error: centreError * width };
}

/**
 * Measures the zero of wavelength of each exposure from night-sky emission lines, which stand still
 * in the observer's frame, where the spectra still hold them. Nothing is corrected.
 *
 * @param spectra Exposures on barycentric wavelengths.
 * @param options Wavelengths of the lines, half width of the fits, faintest line.
 * @returns One shift an exposure: the mean over its lines, weighted by their errors.
 *
 * @example
 * ```ts
 * import { measureSkyLines } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const wavelength_angstrom = Float64Array.from({ length: 200 }, (_, i) => 5500 + 0.8 * i);
 * const [zero] = measureSkyLines([{
 *   source: "a.fits",
 *   group: 0,
 *   wavelength_angstrom,
 *   flux: wavelength_angstrom.map((w) => 100 + 900 * Math.exp(-0.5 * ((w - 5579) / 1) ** 2)),
 *   error: wavelength_angstrom.map(() => 5),
 *   errors_given: true,
 *   mid: [2460311, 0.5],
 *   exposure_s: 60,
 *   observer_factor: 1,
 *   resolution_angstrom: null,
 * }], { lines_angstrom: [5578.89] });
 * assertAlmostEquals(zero!.shift_kms, 299792.458 * (5579 / 5578.89 - 1), 0.5);
 * ```
 */
export function measureSkyLines(
  spectra: readonly Spectrum[],
  options: SkyLineOptions = {},
): ZeroShift[] {
  const {
    lines_angstrom = nightSkyLines.filter((l) => l.isolated).map((l) => l.vacuum_angstrom),
    half_width_kms: half = 250,
    faintest = 10,
  } = options;
  return spectra.map((spectrum) => {
    const { source, observer_factor } = spectrum;
    const fits = observer_factor === null
      ? []
      : lines_angstrom.flatMap((line) => fitOne(spectrum, line, { half, faintest }) ?? []);
    if (fits.length === 0) return { source, shift_kms: NaN, error_kms: NaN, features: 0 };
    const weight = fits.reduce((sum, f) => sum + 1 / f.error ** 2, 0);
    const shift_kms = fits.reduce((sum, f) => sum + f.shift / f.error ** 2, 0) / weight;
    return { source, shift_kms, error_kms: 1 / Math.sqrt(weight), features: fits.length };
  });
}
