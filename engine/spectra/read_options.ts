import type { Direction, Site, TimeMark, TimePlace, TimeScale } from "../sky/mod.ts";

/** Medium of wavelengths. */
export type WavelengthMedium = "air" | "vacuum";
/** Frame of wavelengths as they are recorded. */
export type WavelengthFrame = "topocentric" | "heliocentric" | "barycentric";
/** How files are laid out. */
export type SpectraLayout = "image" | "stack" | "table" | "text";

/** Options of `readExposures`: what the files do not say, or say wrongly. */
export interface ReadExposuresOptions {
  /**
   * How the files are laid out.
   * @default "auto"
   */
  readonly layout?: "auto" | SpectraLayout;
  /**
   * Log of a text layout: path of a CSV file with a row for each exposure.
   */
  readonly log?: string;
  /**
   * Names of keys or columns, by what they hold: `mid`, `start`, `end`, `exposure_s`, `ra`, `dec`,
   * `latitude`, `longitude` (east), `longitude_west`, `height`, `resolution`, `wavelength`, `flux`,
   * `error`, `inverse_variance`, `mask`, `file`, `aperture` (this one a number, not a name).
   * @default {}
   */
  readonly keys?: Readonly<Record<string, string>>;
  /** Site, where the headers lack it. */
  readonly site?: Site;
  /** Target, where the headers lack it. */
  readonly target?: Direction;
  /**
   * Medium of the wavelengths.
   * @default "auto"
   */
  readonly wavelength_medium?: "auto" | WavelengthMedium;
  /**
   * Frame of the wavelengths as they are now.
   * @default "auto"
   */
  readonly wavelength_frame?: "auto" | WavelengthFrame;
  /**
   * Time scale.
   * @default "auto"
   */
  readonly time_scale?: "auto" | TimeScale;
  /**
   * Place for which the times hold.
   * @default "auto"
   */
  readonly time_place?: "auto" | TimePlace;
  /**
   * What a recorded time marks.
   * @default "auto"
   */
  readonly time_marks?: "auto" | TimeMark;
  /** Instrumental full width at half maximum, Å. */
  readonly resolution_angstrom?: number;
  /** Instrumental full width at half maximum, km/s. */
  readonly resolution_kms?: number;
  /** Wavelength over full width at half maximum. */
  readonly resolving_power?: number;
  /**
   * Index of the `[[exposures]]` group.
   * @default 0
   */
  readonly group?: number;
}
