import { Matrix } from "ml-matrix";
import { nonNegativeLeastSquares, type RandomStream } from "../numerics/mod.ts";
import { axisymmetricPart } from "./axisymmetric_part.ts";
import type { TrailSamples } from "./check_trail.ts";
import { halfOrbitIntervals } from "./half_orbit.ts";
import type { LinearOperator } from "./linear_operator.ts";
import { makeProjector } from "./projector.ts";
import { ringKernels } from "./ring_profile.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** How far the middle of a line lies from what positive rings make. */
export interface CoreMiss {
  /** Mean of data minus best positive model in the core, normalised flux. */
  readonly miss: number;
  /** Half the range of velocities that counts as core, km/s. */
  readonly core_kms: number;
  /** Highest mean flux of the line. */
  readonly peak: number;
  /** Mean flux that the best positive rings make at a speed |v − γ|, km/s. */
  readonly roundProfile: (speed_kms: number) => number;
  /** Skewness of the miss under noise of the mean profile: rings take up what is too bright, not what is too dark. */
  readonly skewness: (random: RandomStream) => number;
}

/** Options of {@linkcode coreMiss}. */
export interface CoreMissOptions {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /** Half the range of velocities that counts, km/s. */
  readonly half_range_kms: number;
  /** A map that fits the data on the whole: what of it is not round is taken out of the data. */
  readonly map: VelocityMap;
  /**
   * Half the range of velocities that counts as core, km/s.
   *
   * @default {half the speed of the mean profile's peak}
   */
  readonly core_kms?: number;
  /**
   * Projector of the trail's sampling from maps of this shape, where there is one already.
   *
   * @default {one is made}
   */
  readonly projector?: LinearOperator;
}

/**
 * Mean miss of the best positive map in the middle of the line. Averaged over the orbit, a positive
 * map gives a sum of rings with positive fluxes; the shear-broadened core of an optically thick disc is
 * deeper than any such sum (Horne & Marsh 1986, MNRAS 218, 761).
 *
 * @param trail Exposures, data, errors.
 * @param options Systemic velocity, range, a map.
 * @returns The miss; negative where the data are deeper.
 *
 * @example
 * ```ts
 * import { coreMiss } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 12, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const flux = sampling.velocity_kms.map((v) =>
 *   Math.exp(-0.5 * ((Math.abs(v) - 300) / 60) ** 2) - 0.2 * Math.exp(-0.5 * (v / 60) ** 2)
 * );
 * const { miss, peak } = coreMiss({ sampling, flux, error: flux.map(() => 0.05) }, {
 *   systemic_kms: 0,
 *   half_range_kms: 600,
 *   map: { pixels: 27, half_width_kms: 500, intensity: new Float64Array(729) },
 * });
 * assert(miss / peak < -0.1);
 * ```
 */
export function coreMiss(trail: TrailSamples, options: CoreMissOptions): CoreMiss {
  const mean = meanProfile(trail, options);
  const core = coreOf(mean);
  const { core_kms = core.core_kms } = options;
  const kernels = ringKernels({ ...mean, rings_kms: mean.edges_kms });
  const { fluxes, model } = ringFit(kernels, mean);
  const missOf = (value: Float64Array, fitted: Float64Array) => {
    let sum = 0, weight = 0;
    for (let b = 0; b < fitted.length && mean.edges_kms[b + 1]! <= core_kms; b++) {
      const w = 1 / mean.error[b]! ** 2;
      sum += w * (value[b]! - fitted[b]!);
      weight += w;
    }
    return sum / weight;
  };
  let profile: ((speed: number) => number) | undefined;
  return {
    ...{ miss: missOf(mean.value, model), core_kms, peak: core.peak },
    roundProfile: (speed) => (profile ??= fineProfile(fluxes, mean))(speed),
    skewness: (random) =>
      skewnessOf(Float64Array.from({ length: DRAWS }, () => {
        const value = model.map((m, b) => m + mean.error[b]! * random.normal());
        return missOf(value, ringFit(kernels, { value, error: mean.error }).model);
      })),
  };
}

/** Draws of noise that a skewness is taken from: its error is √(6/draws). */
const DRAWS = 40;

function skewnessOf(values: Float64Array): number {
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  const moment = (power: number) =>
    values.reduce((sum, v) => sum + (v - mean) ** power, 0) / values.length;
  return moment(3) / moment(2) ** 1.5;
}

/** Bins and rings cost the cube of their number. */
const MOST_BINS = 40;

interface MeanProfile {
  readonly edges_kms: Float64Array;
  readonly value: Float64Array;
  readonly error: Float64Array;
  readonly sigma_kms: readonly number[];
  readonly weight: readonly number[];
}

/** Mean profile against |v| without the part of the map that is not round. */
function meanProfile(trail: TrailSamples, options: CoreMissOptions): MeanProfile {
  const { sampling, flux, error } = trail;
  const { systemic_kms, half_range_kms, map } = options;
  const shift = systemFrame(systemic_kms);
  const velocity = shiftVelocities(sampling.velocity_kms, shift);
  const round = axisymmetricPart(map, {
    centre: { vx_kms: 0, vy_kms: 0 },
    statistic: "mean",
  });
  const { projector = makeProjector(sampling, { ...map, systemic_kms }) } = options;
  const uneven = projector
    .forward(map.intensity.map((f, k) => f - round.intensity[k]!));
  const narrowest = sampling.profile_sigma_kms.reduce((a, b) => Math.min(a, b), Infinity);
  const bins = Math.max(8, Math.min(MOST_BINS, Math.floor(half_range_kms / narrowest)));
  const width = half_range_kms / bins;
  const share = halfOrbitIntervals(sampling.phase);
  const sum = new Float64Array(bins),
    total = new Float64Array(bins),
    square = new Float64Array(bins);
  for (let i = 0; i < sampling.count; i++) {
    const cell = new Float64Array(bins), weight = new Float64Array(bins);
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      const b = Math.floor(Math.abs(velocity[k]!) / width);
      if (b >= bins || !(error[k]! < Infinity)) continue;
      const w = 1 / error[k]! ** 2;
      cell[b] = cell[b]! + w * (flux[k]! - uneven[k]!);
      weight[b] = weight[b]! + w;
    }
    for (let b = 0; b < bins; b++) {
      if (weight[b] === 0) continue;
      sum[b] = sum[b]! + share[i]! * cell[b]! / weight[b]!;
      total[b] = total[b]! + share[i]!;
      square[b] = square[b]! + share[i]! ** 2 / weight[b]!;
    }
  }
  const seen = total.findIndex((t) => t === 0);
  const used = seen < 0 ? bins : seen;
  const sigmas = new Map<number, number>();
  const all = share.reduce((a, b) => a + b, 0);
  sampling.profile_sigma_kms.forEach((s, i) => {
    const rounded = Number((s * shift.factor).toPrecision(2));
    sigmas.set(rounded, (sigmas.get(rounded) ?? 0) + share[i]! / all);
  });
  const single = new Set(sampling.profile_sigma_kms).size === 1;
  return {
    edges_kms: Float64Array.from({ length: used + 1 }, (_, b) => b * width),
    value: sum.subarray(0, used).map((s, b) => s / total[b]!),
    error: square.subarray(0, used).map((s, b) => Math.sqrt(s) / total[b]!),
    sigma_kms: single ? [narrowest * shift.factor] : [...sigmas.keys()],
    weight: single ? [1] : [...sigmas.values()],
  };
}

/** Half the speed of the mean profile's peak, or half its half-width when it has one peak. */
function coreOf({ value, edges_kms }: MeanProfile): { core_kms: number; peak: number } {
  const top = value.reduce((best, level, b) => level > value[best]! ? b : best, 0);
  const peak = value[top]!;
  const half = value.findIndex((level, b) => b > top && level < 0.5 * peak);
  const reach = top >= 2 ? edges_kms[top]! : edges_kms[Math.max(2, half)]!;
  return { core_kms: Math.max(2 * edges_kms[1]!, 0.5 * reach), peak };
}

/** Points of the interpolated profile per bin. */
const FINE = 6;

/** The profile of rings against speed. */
function fineProfile(
  fluxes: readonly number[],
  mean: MeanProfile,
): (speed_kms: number) => number {
  const { edges_kms } = mean;
  const rings = edges_kms.length - 1, bins = FINE * rings;
  const step = edges_kms[rings]! / bins;
  const kernels = ringKernels({
    ...mean,
    rings_kms: edges_kms,
    edges_kms: Float64Array.from({ length: bins + 1 }, (_, b) => b * step),
  });
  const value = new Float64Array(bins);
  fluxes.forEach((flux, r) => {
    if (flux === 0) return;
    for (let b = 0; b < bins; b++) value[b] = value[b]! + flux * kernels[r * bins + b]!;
  });
  return (speed) => {
    const at = speed / step - 0.5, b = Math.floor(at);
    if (b >= bins) return 0;
    // The profile is even, and there is none beyond the last ring.
    const low = value[Math.max(0, b)]!, high = b + 1 < bins ? value[b + 1]! : 0;
    return low + (at - b) * (high - low);
  };
}

/** The best sum of rings with positive fluxes. */
function ringFit(
  kernels: Float64Array,
  { value, error }: { readonly value: Float64Array; readonly error: Float64Array },
): { fluxes: number[]; model: Float64Array } {
  const bins = value.length, rings = kernels.length / bins;
  const design = Matrix.zeros(bins, rings);
  for (let r = 0; r < rings; r++) {
    for (let b = 0; b < bins; b++) design.set(b, r, kernels[r * bins + b]! / error[b]!);
  }
  const fluxes = Array.from(
    nonNegativeLeastSquares(design, value.map((v, b) => v / error[b]!)),
  );
  const model = value.map((_, b) =>
    fluxes.reduce((sum, flux, r) => sum + flux * kernels[r * bins + b]!, 0)
  );
  return { fluxes, model };
}
