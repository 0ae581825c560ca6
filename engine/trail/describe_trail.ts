import { type Ephemeris, phaseError } from "../binary/mod.ts";
import type { Warning } from "../errors.ts";
import { median, quantile } from "../numerics/mod.ts";
import type { SplitDate } from "../sky/mod.ts";
import { type MeanProfile, meanProfile } from "./mean_profile.ts";
import { type PairNoise, pairNoise } from "./noise_pairs.ts";
import { type PhaseCoverage, phaseCoverage } from "./phase_coverage.ts";
import { measureProfile, type ProfileMeasures } from "./profile_measures.ts";
import { FWHM_OVER_SIGMA } from "./profile_width.ts";
import type { Trail } from "./trail.ts";
import { trailAdvice } from "./trail_advice.ts";

/** Lowest, median and highest of a quantity over exposures. */
export interface Spread {
  /** Lowest. */
  readonly low: number;
  /** Median. */
  readonly median: number;
  /** Highest. */
  readonly high: number;
}

/** Options of {@linkcode describeTrail}. */
export interface DescribeOptions {
  /** The ephemeris on which the trail was folded. */
  readonly ephemeris: Ephemeris;
  /** Any instant within the data, BJD(TDB): where the error of the phase is told. */
  readonly epoch: SplitDate;
  /**
   * Velocity of the features that matter, km/s.
   * @default half of the separation of the mean profile's peaks, where most of a disc's light is; with
   * one peak alone half of the full width at half maximum; at most the reach
   */
  readonly velocity_kms?: number;
  /**
   * Systemic velocity, km/s.
   * @default 0
   */
  readonly systemic_kms?: number;
}

/** What an observer wants to know of a trail before inverting it. */
export interface TrailDescription {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength, vacuum, Å. */
  readonly rest_vacuum_angstrom: number;
  /** The same in air, Å. */
  readonly rest_air_angstrom: number;
  /** Number of exposures. */
  readonly exposures: number;
  /** Time from the first to the last mid-exposure, orbits. */
  readonly span_orbits: number;
  /** Coverage of the orbit. */
  readonly coverage: PhaseCoverage;
  /** Signal to noise of the continuum in a resolution element. */
  readonly signal_to_noise: Spread;
  /** Full width at half maximum of the instrumental profile, km/s: the resolution element. */
  readonly resolution_kms: Spread;
  /** Native pixel, km/s. */
  readonly pixel_kms: number;
  /** Velocity for which smear and number of exposures are told, km/s. */
  readonly velocity_kms: number;
  /** How far a feature of that speed moves within an exposure, 2π × velocity × width in phase, km/s. */
  readonly smear_kms: Spread;
  /**
   * Steps in half an orbit, π × velocity / resolution: from one to the next such a feature moves by a
   * resolution element. A map of that velocity and resolution needs an exposure in each.
   */
  readonly directions_needed: number;
  /**
   * How many of these steps hold the middle of an exposure, all orbits folded: half an orbit later a
   * transparent gas shows the mirrored profile, so the two halves count as one.
   */
  readonly directions_observed: number;
  /** Standard deviation of the phase from the ephemeris at the epoch, cycles. */
  readonly phase_error: number;
  /** How far that moves a feature of that speed on the map, km/s. */
  readonly phase_error_kms: number;
  /** Mean profile. */
  readonly mean: MeanProfile;
  /** What is measured on it. */
  readonly measures: ProfileMeasures;
  /** Whether the line is net in emission, net in absorption, or emission with a core below the continuum. */
  readonly net: "emission" | "absorption" | "emission with absorption core";
  /** Variation of the continuum from exposure to exposure: standard deviation over mean. */
  readonly continuum_variation: number;
  /** Semi-amplitude of the continuum with the orbital phase, over its mean: what dividing imprints on the line. */
  readonly continuum_orbital_amplitude: number;
  /** Noise within the line from repeats and mirrored pairs. */
  readonly pairs: { readonly repeat: PairNoise | null; readonly mirror: PairNoise | null };
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

function spread(values: readonly number[]): Spread {
  return { low: quantile(values, 0), median: median(values), high: quantile(values, 1) };
}

// Errors at the ends of the reach, where the line is faint, are those of the continuum.
function continuumNoise(trail: Trail, row: number): number {
  const { start, velocity_kms } = trail.sampling;
  const [from, to] = [start[row]!, start[row + 1]!];
  const reach = Math.max(...[...velocity_kms.subarray(from, to)].map(Math.abs));
  const errors: number[] = [];
  for (let k = from; k < to; k++) {
    if (Math.abs(velocity_kms[k]!) > 0.8 * reach && Number.isFinite(trail.error[k]!)) {
      errors.push(trail.error[k]!);
    }
  }
  return errors.length === 0 ? NaN : median(errors);
}

function directionsObserved(phase: Float64Array, steps: number): number {
  return new Set(Array.from(phase, (p) => Math.floor((p % 0.5) * 2 * steps))).size;
}

function orbitalAmplitude(values: Float64Array, phase: Float64Array): number {
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  let [c, s] = [0, 0];
  values.forEach((v, i) => {
    c += (v / mean - 1) * Math.cos(2 * Math.PI * phase[i]!);
    s += (v / mean - 1) * Math.sin(2 * Math.PI * phase[i]!);
  });
  return 2 * Math.hypot(c, s) / values.length;
}

/**
 * Describes a trail as an observer checks it: coverage of the orbit, signal to noise, smear and
 * resolution against what a map needs, error of the phase, shape of the line, noise.
 *
 * Signal to noise is that of the continuum in a resolution element, whose width stands beside it.
 * Half an orbit is to be seen in π V / FWHM steps: then a feature of speed V moves by at most one
 * resolution element from one exposure to the next.
 *
 * @param trail The trail.
 * @param options Ephemeris and epoch; velocity of interest; systemic velocity.
 * @returns The description.
 *
 * @example
 * ```ts
 * import { describeTrail, makeTrail } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
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
 * const told = describeTrail(trail, { ephemeris, epoch: [2460311, 0.55], velocity_kms: 500 });
 * // 300 s of 8640 s, at 2 pi 500 km/s per orbit.
 * assertAlmostEquals(told.smear_kms.median, 2 * Math.PI * 500 * 300 / 8640, 1e-9);
 * assertAlmostEquals(told.phase_error, 1e-3, 1e-5);
 * ```
 */
export function describeTrail(trail: Trail, options: DescribeOptions): TrailDescription {
  const { ephemeris, epoch, systemic_kms = 0 } = options;
  const { line, sampling, grid, noise } = trail;
  const rows = Array.from({ length: sampling.count }, (_, i) => i);
  const mean = meanProfile(trail);
  const resolution_kms = spread(rows.map((i) => FWHM_OVER_SIGMA * sampling.profile_sigma_kms[i]!));
  const flux = mean.flux.map((f) => f);
  const total = flux.reduce((sum, f) => sum + (Number.isFinite(f) ? f : 0), 0);
  const lowest = Math.min(...[...flux].filter((f) => Number.isFinite(f)));
  const deepest = [...flux].findIndex((f) => f === lowest);
  const net = total < 0
    ? "absorption"
    : lowest < -5 * mean.error[deepest]! && lowest < -0.02
    ? "emission with absorption core"
    : "emission";
  const upright = { ...mean, flux: total < 0 ? flux.map((f) => -f) : flux };
  const measures = measureProfile(upright, { smooth_kms: resolution_kms.median });
  const reach = -grid.first_kms;
  const velocity_kms = options.velocity_kms ??
    Math.min(
      reach,
      [measures.peak_separation_kms, measures.fwhm_kms, reach].find((width) => width > 0)! / 2,
    );

  const pixels = rows.map((i) =>
    median(sampling.pixel_kms.subarray(sampling.start[i]!, sampling.start[i + 1]!))
  );
  const signal_to_noise = spread(
    rows.map((i) => {
      const elements = Math.max(1, FWHM_OVER_SIGMA * sampling.profile_sigma_kms[i]! / pixels[i]!);
      return Math.sqrt(elements / noise.correlation_length_pixels) / continuumNoise(trail, i);
    }).filter((value) => Number.isFinite(value)),
  );
  const smear_kms = spread(rows.map((i) => 2 * Math.PI * velocity_kms * sampling.phase_width[i]!));
  const coverage = phaseCoverage(sampling);
  const span_orbits = sampling.count === 0
    ? 0
    : sampling.cycle.at(-1)! + sampling.phase.at(-1)! - sampling.cycle[0]! - sampling.phase[0]!;
  const needed = Math.max(1, Math.ceil(Math.PI * velocity_kms / resolution_kms.median));
  const sigma_phase = phaseError(ephemeris, epoch);
  const level = trail.continuum.reduce((a, b) => a + b, 0) / sampling.count;
  const variance = trail.continuum.reduce((sum, c) => sum + (c - level) ** 2, 0) / sampling.count;

  const phase_error_kms = 2 * Math.PI * velocity_kms * sigma_phase;
  const description: Omit<TrailDescription, "warnings"> = {
    line: line.name,
    rest_vacuum_angstrom: line.vacuum_angstrom,
    rest_air_angstrom: line.air_angstrom,
    exposures: sampling.count,
    span_orbits,
    coverage,
    signal_to_noise,
    resolution_kms,
    pixel_kms: median(pixels),
    velocity_kms,
    smear_kms,
    directions_needed: needed,
    directions_observed: directionsObserved(sampling.phase, needed),
    phase_error: sigma_phase,
    phase_error_kms,
    mean,
    measures,
    net,
    continuum_variation: Math.sqrt(variance) / level,
    continuum_orbital_amplitude: orbitalAmplitude(trail.continuum, sampling.phase),
    pairs: pairNoise(trail, { systemic_kms }),
  };
  return { ...description, warnings: trailAdvice(description, ephemeris) };
}
