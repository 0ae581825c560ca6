import type { Ephemeris } from "../binary/mod.ts";
import type { SpectralLine } from "../sky/mod.ts";
import type { VelocityRange } from "./continuum.ts";
import type { ObservedMask } from "./masks.ts";
import type { PhaseRange } from "./phase_ranges.ts";
import type { Photometry } from "./photometry.ts";

/** Options of `makeTrail`. */
export interface TrailOptions {
  /** The line: its rest wavelength makes the velocities. */
  readonly line: SpectralLine;
  /** The ephemeris on which the exposures are folded. */
  readonly ephemeris: Ephemeris;
  /**
   * Velocities kept on either side of the rest wavelength, km/s.
   * @default 2500
   */
  readonly reach_kms?: number;
  /**
   * Windows in which the continuum is seen, km/s about the line.
   * @default the nearest 2000 km/s on each side beyond the reach that hold no known line
   */
  readonly continuum_kms?: readonly VelocityRange[];
  /**
   * "divide" by each exposure's continuum, or "scale": subtract it and divide by one level for all,
   * so that changes of calibrated line flux stay.
   * @default "divide"
   */
  readonly continuum?: "divide" | "scale";
  /**
   * Order of the continuum polynomial.
   * @default 1
   */
  readonly continuum_order?: number;
  /**
   * Phases left out, cycles.
   * @default []
   */
  readonly skip_phases?: readonly PhaseRange[];
  /**
   * Number of phase bins of the display grid; 0 gives every exposure its row. The native samples
   * stay those of the single exposures: binning them would only lose time resolution.
   * @default 0
   */
  readonly phase_bins?: number;
  /**
   * Whether cosmic rays are searched and masked.
   * @default true
   */
  readonly cosmic_rays?: boolean;
  /**
   * Ranges masked in the observer's frame.
   * @default []
   */
  readonly masks?: readonly ObservedMask[];
  /**
   * Factor on the stated errors, or "measured": from the scatter of the continuum, by group.
   * @default "measured"
   */
  readonly noise_scale?: number | "measured";
  /**
   * Bin of the display grid, km/s.
   * @default the median native pixel
   */
  readonly step_kms?: number;
  /**
   * Full width at half maximum of the instrumental profile at this line, km/s, where the spectra do
   * not say or the line has its own.
   */
  readonly resolution_kms?: number;
  /**
   * Brightness by which the exposures are scaled; needs `continuum: "scale"`. One light curve for
   * all, or one for each group of exposures (null for none). Groups that share a light curve share
   * its level.
   */
  readonly photometry?: Photometry | readonly (Photometry | null)[];
}
