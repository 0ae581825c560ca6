import { InputError } from "../errors.ts";
import type { TrailSamples } from "./check_trail.ts";
import { maximumEntropy, type MaximumEntropyOptions } from "./maximum_entropy.ts";
import { type ParameterScan, scanParameter } from "./parameter_scan.ts";

/** How closely maps of a scan are solved: their objectives are compared to a fraction of 1. */
const CLOSELY = 1e-5;

/** Least objective χ² − α S over maps, with the multiplier held. */
function objectiveOf(trail: TrailSamples, options: MaximumEntropyOptions): number {
  const found = maximumEntropy(trail, {
    ...options,
    misalignment: CLOSELY,
    max_iterations: 400,
  });
  let count = 0;
  for (const e of trail.error) if (e < Infinity) count++;
  return found.reduced_chi_square * count - options.multiplier! * found.entropy;
}

/** What a scan starts from: the map at the middle value, whose multiplier is held. */
function held(trail: TrailSamples, options: MaximumEntropyOptions): MaximumEntropyOptions {
  const prior = options.prior ?? { kind: "uniform" };
  if (prior.kind !== "uniform" && prior.kind !== "image") {
    throw new InputError({
      action: "scan with maximum-entropy maps",
      rule: "the default image must not follow the map: uniform, or an image",
      value: prior.kind,
      key: "map.prior_image",
    });
  }
  const middle = maximumEntropy(trail, { ...options, prior });
  return {
    ...options,
    prior,
    level: middle.level,
    multiplier: middle.multiplier,
    start: middle.map,
  };
}

/**
 * Searches the systemic velocity by the map it gives: with the multiplier held at that of the middle
 * value, the objective χ² − α S is least where a map needs the least structure to fit. It behaves like
 * chi-square in γ, so the width at which it grows by 1 is the error. {@linkcode systemicByParity} is
 * faster and needs no map; the two should agree.
 *
 * @param trail Exposures, data, errors.
 * @param options Options of the map, and the velocities to try; the default image uniform or given.
 * @returns The curve and its minimum, km/s.
 * @throws {InputError} When the data cannot be mapped, or the default image follows the map.
 *
 * @example A default image that follows the map is refused
 * ```ts
 * import { scanSystemic } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * const sampling = {
 *   count: 0,
 *   phase: new Float64Array(0),
 *   cycle: new Float64Array(0),
 *   phase_width: new Float64Array(0),
 *   start: Uint32Array.of(0),
 *   velocity_kms: new Float64Array(0),
 *   pixel_kms: new Float64Array(0),
 *   profile_sigma_kms: new Float64Array(0),
 * };
 * const trail = { sampling, flux: new Float64Array(0), error: new Float64Array(0) };
 * assertThrows(() =>
 *   scanSystemic(trail, {
 *     pixels: 21,
 *     half_width_kms: 400,
 *     prior: { kind: "blurred", fwhm_kms: 100 },
 *     values_kms: [-10, 0, 10],
 *   })
 * );
 * ```
 */
export function scanSystemic(
  trail: TrailSamples,
  options: Omit<MaximumEntropyOptions, "systemic_kms" | "projector"> & {
    readonly values_kms: readonly number[];
  },
): ParameterScan {
  const { values_kms } = options;
  const middle = values_kms[Math.floor(values_kms.length / 2)] ?? 0;
  const fixed = held(trail, { ...options, systemic_kms: middle });
  return scanParameter(
    (systemic_kms) => objectiveOf(trail, { ...fixed, systemic_kms }),
    values_kms,
  );
}

/**
 * Searches the period by the map it gives, as {@linkcode scanSystemic} does the systemic velocity.
 * Phases drift with the cycle number, so it needs several nights; one night gives a flat curve.
 *
 * @param trail Exposures with their cycle numbers, data, errors.
 * @param options Options of the map, and the ratios to the ephemeris' period to try.
 * @returns The curve and its minimum, period over that of the ephemeris.
 * @throws {InputError} When the data cannot be mapped, or the default image follows the map.
 *
 * @example A default image that follows the map is refused
 * ```ts
 * import { scanPeriod } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * const sampling = {
 *   count: 0,
 *   phase: new Float64Array(0),
 *   cycle: new Float64Array(0),
 *   phase_width: new Float64Array(0),
 *   start: Uint32Array.of(0),
 *   velocity_kms: new Float64Array(0),
 *   pixel_kms: new Float64Array(0),
 *   profile_sigma_kms: new Float64Array(0),
 * };
 * const trail = { sampling, flux: new Float64Array(0), error: new Float64Array(0) };
 * assertThrows(() =>
 *   scanPeriod(trail, {
 *     pixels: 21,
 *     half_width_kms: 400,
 *     systemic_kms: 0,
 *     prior: { kind: "blurred", fwhm_kms: 100 },
 *     ratios: [0.99, 1, 1.01],
 *   })
 * );
 * ```
 */
export function scanPeriod(
  trail: TrailSamples,
  options: Omit<MaximumEntropyOptions, "projector"> & { readonly ratios: readonly number[] },
): ParameterScan {
  const { ratios } = options;
  const fixed = held(trail, options);
  const { sampling } = trail;
  // About the middle of the data: a shift of phase zero only turns the map.
  const orbits = sampling.phase.map((p, i) => p + sampling.cycle[i]!);
  const middle = Math.round(orbits.reduce((a, b) => a + b, 0) / orbits.length);
  return scanParameter((ratio) => {
    const turned = orbits.map((o) => (o - middle) / ratio);
    const cycle = turned.map(Math.floor);
    const phase = turned.map((o, i) => o - cycle[i]!);
    return objectiveOf({ ...trail, sampling: { ...sampling, phase, cycle } }, fixed);
  }, ratios);
}

/**
 * Searches the flux ratio of one member of a blend that shares the map, as {@linkcode scanSystemic}
 * does the systemic velocity.
 *
 * @param trail Exposures, data, errors.
 * @param options Options of the map, the member's rest wavelength ratio, and the flux ratios to try;
 * `blends` are other members, held.
 * @returns The curve and its minimum.
 * @throws {InputError} When the data cannot be mapped, or the default image follows the map.
 *
 * @example A default image that follows the map is refused
 * ```ts
 * import { scanBlendRatio } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * const sampling = {
 *   count: 0,
 *   phase: new Float64Array(0),
 *   cycle: new Float64Array(0),
 *   phase_width: new Float64Array(0),
 *   start: Uint32Array.of(0),
 *   velocity_kms: new Float64Array(0),
 *   pixel_kms: new Float64Array(0),
 *   profile_sigma_kms: new Float64Array(0),
 * };
 * const trail = { sampling, flux: new Float64Array(0), error: new Float64Array(0) };
 * assertThrows(() =>
 *   scanBlendRatio(trail, {
 *     pixels: 21,
 *     half_width_kms: 400,
 *     systemic_kms: 0,
 *     prior: { kind: "blurred", fwhm_kms: 100 },
 *     member_rest_ratio: 1.001,
 *     flux_ratios: [0.2, 0.4, 0.6],
 *   })
 * );
 * ```
 */
export function scanBlendRatio(
  trail: TrailSamples,
  options: Omit<MaximumEntropyOptions, "projector"> & {
    readonly member_rest_ratio: number;
    readonly flux_ratios: readonly number[];
  },
): ParameterScan {
  const { member_rest_ratio: rest_ratio, flux_ratios, blends = [] } = options;
  const blend = (flux_ratio: number) => ({ blends: [...blends, { rest_ratio, flux_ratio }] });
  const middle = flux_ratios[Math.floor(flux_ratios.length / 2)] ?? 1;
  const fixed = held(trail, { ...options, ...blend(middle) });
  return scanParameter((ratio) => objectiveOf(trail, { ...fixed, ...blend(ratio) }), flux_ratios);
}
