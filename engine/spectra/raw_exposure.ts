import type { Direction, Site, SplitDate } from "../sky/mod.ts";
import type { WavelengthMedium } from "./read_options.ts";

/** An exposure as a telescope delivers it: wavelengths as observed there, times in UTC. */
export interface RawExposure extends Direction {
  /** Name of the target. */
  readonly object: string;
  /** Pixel centres, N values, strictly increasing, topocentric, Å. */
  readonly wavelength_angstrom: Float64Array;
  /** Medium of the wavelengths. */
  readonly medium: WavelengthMedium;
  /** Flux per unit wavelength, N values; NaN where not recorded. */
  readonly flux: Float64Array;
  /** Unit of the flux, as in "adu" or "erg/s/cm2/Angstrom". */
  readonly flux_unit: string;
  /** One standard deviation, N values; infinite where masked; null when errors are not kept. */
  readonly error: Float64Array | null;
  /** Start of the exposure, JD(UTC). */
  readonly start: SplitDate;
  /** Exposure time, s. */
  readonly exposure_s: number;
  /** Where the telescope stands. */
  readonly site: Site;
  /** Full width at half maximum of the instrumental profile, Å; null when it is not said. */
  readonly resolution_angstrom: number | null;
}
