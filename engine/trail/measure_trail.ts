import type { RandomStream } from "../numerics/mod.ts";
import { makeGrid } from "./display_grid.ts";
import { meanProfile } from "./mean_profile.ts";
import { measureProfile, type ProfileMeasures, widthInAngstrom } from "./profile_measures.ts";
import { FWHM_OVER_SIGMA } from "./profile_width.ts";
import type { Trail } from "./trail.ts";

/** A value with its error. */
export interface Measured {
  /** The value; NaN when it cannot be had. */
  readonly value: number;
  /** One standard deviation; NaN when it cannot be had. */
  readonly error: number;
}

/** What is measured on one row of a trail, each with its error. */
export interface MeasuredRow {
  /** Phase, cycles; NaN for the mean of all. */
  readonly phase: number;
  /** Exposures averaged in the row. */
  readonly exposures: number;
  /** What was measured on the profile. */
  readonly profile: { readonly [K in keyof ProfileMeasures]: Measured };
  /** Equivalent width, Å, emission positive. */
  readonly equivalent_width_angstrom: Measured;
  /** Level of the continuum at the line, in the files' flux unit. */
  readonly continuum: Measured;
  /** Line flux: equivalent width times the continuum, in the files' flux unit times Å. */
  readonly line_flux: Measured;
}

/** Measurements of a trail. */
export interface TrailMeasurements {
  /** One for every exposure. */
  readonly exposures: readonly MeasuredRow[];
  /** One for every phase bin that holds an exposure. */
  readonly bins: readonly MeasuredRow[];
  /** The mean of all exposures. */
  readonly mean: MeasuredRow;
  /** Smoothing applied before peaks were sought, full width at half maximum, km/s. */
  readonly smooth_kms: number;
  /** Whether the profiles were turned round, as the line is net in absorption. */
  readonly turned: boolean;
}

/** Options of {@linkcode measureTrail}. */
export interface MeasureTrailOptions {
  /** Source of chance for the errors. */
  readonly random: RandomStream;
  /**
   * Number of phase bins.
   * @default 20
   */
  readonly phase_bins?: number;
  /**
   * Number of noisy copies from which errors come.
   * @default 100
   */
  readonly resamples?: number;
  /**
   * Smoothing before peaks are sought, full width at half maximum, km/s.
   * @default the widest instrumental profile, at least 4 % of the reach
   */
  readonly smooth_kms?: number;
}

const KEYS = [
  "equivalent_width_kms",
  "centroid_kms",
  "fwhm_kms",
  "full_width_kms",
  "blue_peak_kms",
  "red_peak_kms",
  "peak_separation_kms",
  "blue_over_red",
] as const satisfies readonly (keyof ProfileMeasures)[];

function deviation(values: readonly number[]): number {
  const known = values.filter((v) => Number.isFinite(v));
  // A quantity that half of the copies do not have is not measured.
  if (known.length < 0.5 * values.length || known.length < 2) return NaN;
  const mean = known.reduce((a, b) => a + b, 0) / known.length;
  return Math.sqrt(known.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (known.length - 1));
}

interface Rows {
  readonly phases: readonly number[];
  readonly members: readonly (readonly number[])[];
  readonly measures: readonly ProfileMeasures[];
}

function measureRows(
  trail: Trail,
  samples: { readonly flux: Float64Array; readonly error: Float64Array },
  options: { readonly phase_bins: number; readonly smooth_kms: number; readonly sign: number },
): { exposures: Rows; bins: Rows; mean: Rows } {
  const { sampling, grid } = trail;
  const { phase_bins, smooth_kms, sign } = options;
  const single = makeGrid(sampling, samples, {
    reach_kms: -grid.first_kms,
    step_kms: grid.step_kms,
  });
  const rowsOf = (members: readonly (readonly number[])[], phases: readonly number[]): Rows => ({
    phases,
    members,
    measures: members.map((rows) => {
      const profile = meanProfile({ grid: single }, rows);
      const flux = profile.flux.map((f) => sign * f);
      return measureProfile({ velocity_kms: profile.velocity_kms, flux }, { smooth_kms });
    }),
  });
  const all = Array.from({ length: sampling.count }, (_, i) => i);
  const binOf = (i: number) =>
    Math.min(phase_bins - 1, Math.floor(sampling.phase[i]! * phase_bins));
  const bins = Array.from({ length: phase_bins }, (_, b) => b)
    .map((b) => ({ phase: (b + 0.5) / phase_bins, rows: all.filter((i) => binOf(i) === b) }))
    .filter((bin) => bin.rows.length > 0);
  return {
    exposures: rowsOf(all.map((i) => [i]), [...sampling.phase]),
    bins: rowsOf(bins.map((bin) => bin.rows), bins.map((bin) => bin.phase)),
    mean: rowsOf([all], [NaN]),
  };
}

// A copy of the samples with noise put on, and each exposure's continuum moved within its error.
function noisyCopy(trail: Trail, random: RandomStream) {
  const { sampling, error } = trail;
  const growth = Math.sqrt(trail.noise.correlation_length_pixels);
  const flux = trail.flux.slice();
  const level = new Float64Array(sampling.count);
  for (let i = 0; i < sampling.count; i++) {
    level[i] = 1 + trail.continuum_error[i]! * random.normal();
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!Number.isFinite(error[k]!)) continue;
      const drawn = flux[k]! + growth * error[k]! * random.normal();
      flux[k] = (1 + drawn) / level[i]! - 1;
    }
  }
  return { flux, level };
}

/**
 * Measures the profiles of a trail: for every exposure, every phase bin and the mean of all,
 * equivalent width, centroid, widths, peaks, V/R, continuum and line flux, with errors from noisy
 * copies of the samples (in which each exposure's continuum varies within its error too).
 *
 * @param trail The trail.
 * @param options Source of chance, bins, copies, smoothing.
 * @returns The measurements. Profiles of a line net in absorption are turned round before peaks and
 * widths are measured; their equivalent width is negative.
 *
 * @example
 * ```ts
 * import { measureTrail, makeTrail } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const line = lineNamed("H beta");
 * const ephemeris = {
 *   period_d: 0.1,
 *   period_error_d: 1e-6,
 *   zero: [2460311, 0.5],
 *   zero_error_d: 1e-4,
 *   covariance_d2: 0,
 *   period_derivative: 0,
 *   zero_marks: "donor-conjunction",
 * } as const;
 * const wavelength_angstrom = Float64Array.from({ length: 500 }, (_, i) => 4740 + 0.5 * i);
 * const spectra = Array.from({ length: 20 }, (_, k) => ({
 *   source: `${k}.fits`,
 *   group: 0,
 *   wavelength_angstrom,
 *   flux: wavelength_angstrom.map((w) =>
 *     100 + 0.001 * k + 200 * Math.exp(-(((w - line.vacuum_angstrom) / 8) ** 2))
 *   ),
 *   error: wavelength_angstrom.map(() => 5),
 *   errors_given: true,
 *   mid: [2460311, 0.5 + 0.005 * k] as const,
 *   exposure_s: 300,
 *   observer_factor: 1,
 *   resolution_angstrom: wavelength_angstrom.map(() => 1.2),
 * }));
 * const trail = makeTrail(spectra, { line, ephemeris, noise_scale: 1 });
 * const { mean } = measureTrail(trail, { random: randomStream(1), resamples: 20 });
 * // A Gaussian twice as high as the continuum and 8 angstrom wide to a factor e.
 * assertAlmostEquals(mean.equivalent_width_angstrom.value, 2 * 8 * Math.sqrt(Math.PI), 0.3);
 * ```
 */
export function measureTrail(trail: Trail, options: MeasureTrailOptions): TrailMeasurements {
  const { random, phase_bins = 20, resamples = 100 } = options;
  const widest = Math.max(...trail.sampling.profile_sigma_kms) * FWHM_OVER_SIGMA;
  const smooth_kms = options.smooth_kms ?? Math.max(widest, -0.04 * trail.grid.first_kms);
  const total = meanProfile(trail).flux.reduce((sum, f) => sum + (Number.isFinite(f) ? f : 0), 0);
  const sign = total < 0 ? -1 : 1;
  const settings = { phase_bins, smooth_kms, sign };

  const truth = measureRows(trail, trail, settings);
  const copies = Array.from({ length: resamples }, () => {
    const { flux, level } = noisyCopy(trail, random);
    return { level, rows: measureRows(trail, { flux, error: trail.error }, settings) };
  });

  const build = (set: "exposures" | "bins" | "mean"): MeasuredRow[] =>
    truth[set].measures.map((measures, r) => {
      const { phases, members } = truth[set];
      const rows = members[r]!;
      const drawn = copies.map((copy) => copy.rows[set].measures[r]!);
      const each = (key: keyof ProfileMeasures): Measured => ({
        value: measures[key],
        error: deviation(drawn.map((d) => d[key])),
      });
      const profile = Object.fromEntries(
        KEYS.map((key) => [key, each(key)]),
      ) as MeasuredRow["profile"];
      const signed = (width: number) => sign * widthInAngstrom(width, trail.line.vacuum_angstrom);
      const width = {
        value: signed(profile.equivalent_width_kms.value),
        error: Math.abs(signed(profile.equivalent_width_kms.error)),
      };
      const level = rows.reduce((sum, i) => sum + trail.continuum[i]!, 0) / rows.length;
      const levels = copies.map((copy) =>
        rows.reduce((sum, i) => sum + trail.continuum[i]! * copy.level[i]!, 0) / rows.length
      );
      return {
        phase: phases[r]!,
        exposures: rows.length,
        profile: {
          ...profile,
          equivalent_width_kms: {
            value: sign * profile.equivalent_width_kms.value,
            error: profile.equivalent_width_kms.error,
          },
        },
        equivalent_width_angstrom: width,
        continuum: { value: level, error: deviation(levels) },
        line_flux: {
          value: width.value * level,
          error: deviation(drawn.map((d, n) => signed(d.equivalent_width_kms) * levels[n]!)),
        },
      };
    });
  return {
    exposures: build("exposures"),
    bins: build("bins"),
    mean: build("mean")[0]!,
    smooth_kms,
    turned: sign < 0,
  };
}
