import type { SpectralLine } from "../sky/mod.ts";
import type { Warning } from "../errors.ts";
import type { Sampling } from "./sampling.ts";

/**
 * A line's trail: normalised flux minus one against velocity and phase (emission positive), on the
 * native pixels for inversion and fits, and on a uniform grid for display.
 */
export interface Trail {
  /** The line, with the rest wavelength that made the velocities. */
  readonly line: SpectralLine;
  /** Exposures in order of time, with their native pixels. */
  readonly sampling: Sampling;
  /** Normalised flux minus one on native pixels; same layout as `sampling.velocity_kms`. A masked sample is 0 with infinite error. */
  readonly flux: Float64Array;
  /** One standard deviation; infinite where masked. */
  readonly error: Float64Array;
  /** The uniform grid for display and back-projection. */
  readonly grid: TrailGrid;
  /** Sources of the exposures, P names, for messages and tables. */
  readonly sources: readonly string[];
  /** Index of each exposure's `[[exposures]]` group, P values. */
  readonly group: Uint16Array;
  /** Level of the fitted continuum at the line, P values, in the flux unit of the files. */
  readonly continuum: Float64Array;
  /** Error of the continuum's level relative to itself, P values. */
  readonly continuum_error: Float64Array;
  /** Noise scale applied to the errors (measured over stated): 1 when none. With several groups, the root mean square over exposures. */
  readonly noise_scale: number;
  /** What was measured of the noise, whether applied or not. */
  readonly noise: TrailNoise;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** The noise of one group of exposures, as the continuum windows show it. */
export interface GroupNoise {
  /** Index of the `[[exposures]]` group. */
  readonly group: number;
  /** False when the files gave no errors and they were estimated from the scatter. */
  readonly errors_given: boolean;
  /** Scatter about the fitted continuum over the stated error. */
  readonly measured_scale: number;
  /** One standard deviation of `measured_scale`. */
  readonly measured_scale_error: number;
  /** Scale applied to the errors of the group. */
  readonly applied_scale: number;
  /** Correlation of the scatter at lags of 1, 2, … pixels, as far as it was measured. */
  readonly lag_correlation: readonly number[];
  /** Samples used. */
  readonly samples: number;
}

/** The noise of a trail. */
export interface TrailNoise {
  /** One entry a group, in order of group. */
  readonly groups: readonly GroupNoise[];
  /**
   * 1 + 2 Σ of the significant lag correlations, weighted by samples: 1 for independent pixels. The
   * number of independent samples is the number of pixels over this; errors of fitted quantities
   * grow by its square root.
   */
  readonly correlation_length_pixels: number;
}

/** A trail on a uniform velocity grid: rows are exposures (or phase bins), columns velocities. */
export interface TrailGrid {
  /** Number of rows, R. */
  readonly rows: number;
  /** Number of velocity bins, C. */
  readonly columns: number;
  /** Centre of the first bin, km/s. */
  readonly first_kms: number;
  /** Bin width, km/s. */
  readonly step_kms: number;
  /** Phase of each row in [0, 1), R values, increasing for bins, in order of time otherwise. */
  readonly phase: Float64Array;
  /** Width of each row in cycles, R values. */
  readonly phase_width: Float64Array;
  /** Area-weighted mean of normalised flux minus one, R × C row-major, stride C; NaN where not covered. */
  readonly flux: Float64Array;
  /** One standard deviation; infinite where not covered. */
  readonly error: Float64Array;
  /**
   * Covariance of each bin with the next one in its row (they share pixels), R × C with stride C; 0
   * in the last column and where either is not covered.
   */
  readonly covariance_next: Float64Array;
}
