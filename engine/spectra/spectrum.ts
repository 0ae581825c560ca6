import type { SplitDate } from "../sky/mod.ts";

/**
 * One exposure, one spectrum: times on BJD(TDB), wavelengths in vacuum in the barycentric frame,
 * on the pixels that the detector (or the observer's pipeline) gave.
 */
export interface Spectrum {
  /** File it came from, with HDU or row where there are several: for messages. */
  readonly source: string;
  /** Index of the `[[exposures]]` group it belongs to, from 0. */
  readonly group: number;
  /** Pixel centres, N values, strictly increasing: vacuum, barycentric, Å. */
  readonly wavelength_angstrom: Float64Array;
  /** Flux per unit wavelength (a density), N values, in the file's unit. NaN where not recorded. */
  readonly flux: Float64Array;
  /** One standard deviation, N values, same unit; infinite where masked. */
  readonly error: Float64Array;
  /** False when the file gave no errors and those in `error` were estimated. */
  readonly errors_given: boolean;
  /** Mid-exposure, BJD(TDB). */
  readonly mid: SplitDate;
  /** Exposure time, s. */
  readonly exposure_s: number;
  /**
   * Barycentric wavelength over observer's wavelength: 1 + v/c of the barycentric correction.
   * Null when the observer's frame cannot be had (then nothing can be masked in it).
   */
  readonly observer_factor: number | null;
  /**
   * Full width at half maximum of the recorded instrumental profile (pixel included), Å at each
   * pixel's wavelength; null when neither file nor target file says.
   */
  readonly resolution_angstrom: Float64Array | null;
}
