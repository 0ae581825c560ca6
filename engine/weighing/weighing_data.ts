import { InputError } from "../errors.ts";
import type { Sampling, Trail } from "../trail/mod.ts";

/** The samples of a trail that are weighed: unmasked ones only, so every error is finite. */
export interface WeighingData {
  /** Exposures and pixels that are left. */
  readonly sampling: Sampling;
  /** Normalised flux minus one, N values; its sign is turned when `sign` is −1. */
  readonly flux: Float64Array;
  /** One standard deviation, N values, all finite and positive. */
  readonly error: Float64Array;
  /** Index of each exposure's `[[exposures]]` group, P values. */
  readonly group: Uint16Array;
  /** −1 for a line in absorption, whose flux was turned over so that parts are positive. */
  readonly sign: 1 | -1;
  /** Correlation of the noise at lags of 1, 2, … pixels; empty when it is white. */
  readonly lag_correlation: readonly number[];
  /** 1 + 2 Σ of those correlations: pixels per independent sample. */
  readonly pixels_per_sample: number;
  /** One standard deviation of a factor that all errors may be wrong by. */
  readonly noise_scale_error: number;
  /** Half-width of the window in velocity, km/s. */
  readonly reach_kms: number;
}

/** The parts of a trail that a fit uses: any trail will do. */
export type WeighableTrail = Pick<
  Trail,
  "line" | "sampling" | "flux" | "error" | "group" | "noise"
>;

/** Options of {@linkcode weighingData}. */
export interface WeighingDataOptions {
  /**
   * Samples beyond this velocity, in km/s from the rest wavelength, are left out.
   *
   * @default {Infinity}
   */
  readonly reach_kms?: number;
}

/** Errors of a pipeline are seldom known better than this (common practice, no source). */
const UNMEASURED = 0.05;

/** An exposure needs this many samples: a baseline and something to say beyond it. */
const LEAST_SAMPLES = 8;

/**
 * Takes from a trail what a fit can use. Masked samples go, and with them exposures of which hardly
 * anything is left.
 *
 * @param trail The trail; not changed.
 * @param options The window.
 * @returns The samples.
 * @throws {InputError} When fewer than three exposures are left, or no resolution is known.
 *
 * @example
 * ```ts
 * import { simulateTrail, weighingData } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 12, seed: 1 });
 * assertEquals(weighingData(trail).sampling.count, 12);
 * ```
 */
export function weighingData(
  trail: WeighableTrail,
  options: WeighingDataOptions = {},
): WeighingData {
  const { reach_kms = Infinity } = options;
  const { sampling } = trail;
  const kept: number[] = [];
  const exposures: number[] = [];
  const start = [0];
  for (let i = 0; i < sampling.count; i++) {
    const before = kept.length;
    for (let n = sampling.start[i]!; n < sampling.start[i + 1]!; n++) {
      const error = trail.error[n]!;
      const usable = error > 0 && error < Infinity && Number.isFinite(trail.flux[n]!);
      if (usable && Math.abs(sampling.velocity_kms[n]!) <= reach_kms) kept.push(n);
    }
    if (kept.length - before < LEAST_SAMPLES) kept.length = before;
    else {
      exposures.push(i);
      start.push(kept.length);
    }
  }
  if (exposures.length < 3) {
    throw new InputError({
      action: `weigh ${trail.line.name}`,
      rule: "at least three exposures must have unmasked samples",
      value: exposures.length,
    });
  }
  const pick = (values: Float64Array) => Float64Array.from(kept, (n) => values[n]!);
  const each = (values: Float64Array) => Float64Array.from(exposures, (i) => values[i]!);
  const flux = pick(trail.flux);
  const pixel_kms = pick(sampling.pixel_kms);
  const velocity_kms = pick(sampling.velocity_kms);
  let light = 0;
  for (let n = 0; n < flux.length; n++) light += flux[n]! * pixel_kms[n]!;
  const sign = light < 0 ? -1 : 1;
  const lags = trail.noise.groups.reduce<readonly number[]>(
    (longest, { lag_correlation }) =>
      lag_correlation.length > longest.length ? lag_correlation : longest,
    [],
  );
  const scaled = trail.noise.groups.filter((group) => group.measured_scale_error > 0);
  const pixels_per_sample = Math.max(1, trail.noise.correlation_length_pixels);
  return {
    sampling: {
      count: exposures.length,
      phase: each(sampling.phase),
      cycle: each(sampling.cycle),
      phase_width: each(sampling.phase_width),
      start: Uint32Array.from(start),
      velocity_kms,
      pixel_kms,
      profile_sigma_kms: each(sampling.profile_sigma_kms),
    },
    flux: sign === 1 ? flux : flux.map((value) => -value),
    error: pick(trail.error),
    group: Uint16Array.from(exposures, (i) => trail.group[i]!),
    sign,
    lag_correlation: pixels_per_sample > 1 ? lags : [],
    pixels_per_sample,
    noise_scale_error: scaled.length === 0 ? UNMEASURED : scaled.reduce(
      (most, group) => Math.max(most, group.measured_scale_error / group.measured_scale),
      0,
    ),
    reach_kms: velocity_kms.reduce((most, v) => Math.max(most, Math.abs(v)), 0),
  };
}
