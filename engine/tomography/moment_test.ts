import { Matrix } from "ml-matrix";
import { InputError } from "../errors.ts";
import { chiSquareTail, minimiseScalar, solveLeastSquares } from "../numerics/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import type { TrailSamples } from "./check_trail.ts";
import {
  type ProfileMoments,
  profileMoments,
  type ProfileMomentsOptions,
} from "./profile_moments.ts";

/** Result of {@linkcode momentTest}. */
export interface MomentTest {
  /** Probability of so large a chi-square if a fixed map made the data. */
  readonly p_value: number;
  /** Chi-square of the moments about their trigonometric polynomials. */
  readonly chi_square: number;
  /** Its degrees of freedom. */
  readonly degrees_of_freedom: number;
  /** Number of exposures whose moments could be measured. */
  readonly exposures: number;
  /** The exposure that departs most. */
  readonly worst: {
    /** Its phase, cycles. */
    readonly phase: number;
    /** Order of the moment that departs most there. */
    readonly order: number;
    /** By how many standard deviations. */
    readonly sigma: number;
  };
}

/**
 * Tests whether any map at all, of either sign, can have made a trail, without making one: the n-th
 * moment about γ of the profiles of a fixed map is a trigonometric polynomial in phase of degree n that
 * holds only harmonics of the parity of n (Helgason; Ludwig 1966, Comm. Pure Appl. Math. 19, 49).
 * Variability, occultation, optical depth that depends on aspect and a wrong γ all break it.
 * Smearing by each exposure is in the harmonics; all orders are tested together.
 *
 * @param trail Exposures, data, errors.
 * @param options Systemic velocity, range, highest moment, error of the continuum.
 * @returns Probability and the exposure that departs most.
 * @throws {InputError} When too few exposures cover the range.
 *
 * @example
 * ```ts
 * import { momentTest } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 20, bins = 101;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 50)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * // A blob that blinks: no fixed map does that.
 * const flux = sampling.velocity_kms.map((v, k) => {
 *   const phase = Math.floor(k / bins) / count;
 *   return (1 + Math.cos(2 * Math.PI * phase)) * Math.exp(-0.5 * (v / 100) ** 2);
 * });
 * const trail = { sampling, flux, error: flux.map(() => 0.05) };
 * assert(momentTest(trail, { systemic_kms: 0, half_range_kms: 600 }).p_value < 1e-6);
 * ```
 */
export function momentTest(trail: TrailSamples, options: ProfileMomentsOptions): MomentTest {
  const moments = measuredMoments(trail, options);
  const { chi_square, whitened } = fitMoments(moments, trail.sampling);
  const size = moments[0]!.moment.length;
  const degrees_of_freedom = moments.length * size - size * (size + 1) / 2;
  let worst = 0, most = -1;
  moments.forEach((_, p) => {
    const square = whitened.subarray(p * size, (p + 1) * size).reduce((s, r) => s + r * r, 0);
    if (square > most) [worst, most] = [p, square];
  });
  const there = whitened.subarray(worst * size, (worst + 1) * size);
  const largest = there.reduce((n, r, k) => Math.abs(r) > Math.abs(there[n]!) ? k : n, 0);
  return {
    p_value: chiSquareTail(chi_square, degrees_of_freedom),
    chi_square,
    degrees_of_freedom,
    exposures: moments.length,
    worst: {
      phase: trail.sampling.phase[moments[worst]!.exposure]!,
      order: largest,
      sigma: there[largest]!,
    },
  };
}

/** The systemic velocity with its error. */
export interface SystemicVelocity {
  /** γ, km/s. */
  readonly systemic_kms: number;
  /** One standard deviation, km/s. */
  readonly error_kms: number;
  /** Chi-square of the moments there, over their degrees of freedom. */
  readonly reduced_chi_square: number;
}

/** Options of {@linkcode systemicByParity}. */
export interface ParityOptions extends ProfileMomentsOptions {
  /**
   * How far on either side of `systemic_kms` to look, km/s.
   *
   * @default {a tenth of the half-range}
   */
  readonly search_kms?: number;
}

/**
 * The systemic velocity from the parity of the moments: about the true γ, odd moments hold odd
 * harmonics of the orbit alone, even moments even ones. It needs no model of the emission, and
 * holds for any fixed map.
 *
 * @param trail Exposures, data, errors.
 * @param options A first guess of γ in the middle of the range.
 * @returns γ with its error; null when the curve of chi-square has no minimum in the range searched.
 * @throws {InputError} When too few exposures cover the range.
 *
 * @example
 * ```ts
 * import { systemicByParity } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const count = 20, bins = 101;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 50)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const flux = sampling.velocity_kms.map((v, k) => {
 *   const angle = 2 * Math.PI * Math.floor(k / bins) / count;
 *   return Math.exp(-0.5 * ((v - 35 - 200 * Math.sin(angle)) / 100) ** 2);
 * });
 * const trail = { sampling, flux, error: flux.map(() => 0.05) };
 * const found = systemicByParity(trail, { systemic_kms: 0, half_range_kms: 700 });
 * assertAlmostEquals(found?.systemic_kms ?? NaN, 35, 0.1);
 * ```
 */
export function systemicByParity(
  trail: TrailSamples,
  options: ParityOptions,
): SystemicVelocity | null {
  const { systemic_kms: guess, half_range_kms } = options;
  const { search_kms = 0.1 * half_range_kms } = options;
  const moments = measuredMoments(trail, options);
  const at = (offset: number) =>
    fitMoments(moments.map((m) => aboutAnother(m, offset)), trail.sampling).chi_square;
  const reach = search_kms / half_range_kms;
  const { x, value } = minimiseScalar(at, [-reach, reach], { tolerance: 1e-7 });
  if (Math.abs(x) > 0.999 * reach) return null;
  const step = 0.01 * reach;
  const bend = (at(x + step) - 2 * value + at(x - step)) / (step * step);
  const error = bend > 0 ? Math.sqrt(2 / bend) : Infinity;
  if (error > reach) return null;
  const size = moments[0]!.moment.length;
  const freedom = moments.length * size - size * (size + 1) / 2 - 1;
  return {
    // Velocities from γ are factors: a step at the true γ is longer by 1 + γ/c, 1e-3 of the error.
    systemic_kms: guess + x * half_range_kms,
    error_kms: error * half_range_kms,
    reduced_chi_square: value / Math.max(1, freedom),
  };
}

/**
 * How well the parity of the moments holds about each of several systemic velocities: the curve of
 * which {@linkcode systemicByParity} finds the minimum.
 *
 * @param trail Exposures, data, errors.
 * @param options A guess of γ in the middle of the range, and the velocities to try.
 * @returns χ² of the moments over their degrees of freedom, one value per velocity.
 * @throws {InputError} When too few exposures cover the range.
 *
 * @example
 * ```ts
 * import { parityScan } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 20, bins = 101;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 50)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const flux = sampling.velocity_kms.map((v) => Math.exp(-0.5 * ((v - 35) / 100) ** 2));
 * const trail = { sampling, flux, error: flux.map(() => 0.05) };
 * const options = { systemic_kms: 0, half_range_kms: 700, velocities_kms: [15, 35, 55] };
 * const [low = 0, at = 0, high = 0] = parityScan(trail, options);
 * assert(at < low && at < high);
 * ```
 */
export function parityScan(
  trail: TrailSamples,
  options: ProfileMomentsOptions & { readonly velocities_kms: ArrayLike<number> },
): Float64Array {
  const { systemic_kms, half_range_kms, velocities_kms } = options;
  const moments = measuredMoments(trail, options);
  const size = moments[0]!.moment.length;
  const freedom = Math.max(1, moments.length * size - size * (size + 1) / 2 - 1);
  return Float64Array.from(velocities_kms, (gamma) => {
    const offset = (gamma - systemic_kms) / half_range_kms;
    return fitMoments(moments.map((m) => aboutAnother(m, offset)), trail.sampling).chi_square /
      freedom;
  });
}

/** The moments about a place further up by an offset, in units of the half-range. */
function aboutAnother(moments: ProfileMoments, offset: number): ProfileMoments {
  const size = moments.moment.length;
  const change = Matrix.zeros(size, size);
  for (let n = 0; n < size; n++) {
    let binomial = 1;
    for (let k = 0; k <= n; k++) {
      change.set(n, n - k, binomial * (-offset) ** k);
      binomial = binomial * (n - k) / (k + 1);
    }
  }
  const covariance = Matrix.from1DArray(size, size, moments.covariance);
  return {
    exposure: moments.exposure,
    moment: Float64Array.from(change.mmul(Matrix.columnVector(moments.moment)).to1DArray()),
    covariance: Float64Array.from(
      change.mmul(covariance).mmul(change.transpose()).to1DArray(),
    ),
  };
}

function measuredMoments(trail: TrailSamples, options: ProfileMomentsOptions): ProfileMoments[] {
  const { order = 3, half_range_kms } = options;
  const size = order + 1, unknowns = size * (size + 1) / 2;
  const moments = profileMoments(trail, options);
  const needed = Math.max(3, Math.floor(unknowns / size) + 1);
  if (moments.length >= needed) return moments;
  throw new InputError({
    action: "test moments of the trail",
    rule: `at least ${needed} exposures must cover ${half_range_kms.toFixed(0)} km/s on either ` +
      "side of the systemic velocity",
    value: moments.length,
  });
}

interface MomentFit {
  readonly chi_square: number;
  /** Residuals of each exposure made independent with unit errors, exposures × moments. */
  readonly whitened: Float64Array;
}

function fitMoments(
  moments: readonly ProfileMoments[],
  { phase, phase_width }: Pick<Sampling, "phase" | "phase_width">,
): MomentFit {
  const size = moments[0]!.moment.length, unknowns = size * (size + 1) / 2;
  const design = Matrix.zeros(moments.length * size, unknowns);
  const data = new Float64Array(moments.length * size);
  moments.forEach(({ exposure, moment, covariance }, p) => {
    const rows = Matrix.zeros(size, unknowns + 1);
    let column = 0;
    for (let n = 0; n < size; n++) {
      for (let m = n % 2; m <= n; m += 2) {
        const angle = 2 * Math.PI * m * phase[exposure]!;
        const half = Math.PI * m * phase_width[exposure]!;
        const smeared = half === 0 ? 1 : Math.sin(half) / half;
        rows.set(n, column++, smeared * Math.cos(angle));
        if (m > 0) rows.set(n, column++, smeared * Math.sin(angle));
      }
      rows.set(n, unknowns, moment[n]!);
    }
    const lower = cholesky(covariance, size);
    for (let c = 0; c <= unknowns; c++) {
      for (let n = 0; n < size; n++) {
        let value = rows.get(n, c);
        for (let k = 0; k < n; k++) value -= lower[n * size + k]! * rows.get(k, c);
        rows.set(n, c, value / lower[n * size + n]!);
      }
    }
    for (let n = 0; n < size; n++) {
      for (let c = 0; c < unknowns; c++) design.set(p * size + n, c, rows.get(n, c));
      data[p * size + n] = rows.get(n, unknowns);
    }
  });
  const { parameters, chi_square } = solveLeastSquares(design, data);
  const whitened = data.map((value, r) =>
    value - parameters.reduce((sum, x, c) => sum + x * design.get(r, c), 0)
  );
  return { chi_square, whitened };
}

/** Lower triangle L with L Lᵀ the given positive matrix. */
function cholesky(matrix: Float64Array, size: number): Float64Array {
  const lower = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let rest = matrix[i * size + j]!;
      for (let k = 0; k < j; k++) rest -= lower[i * size + k]! * lower[j * size + k]!;
      lower[i * size + j] = i === j ? Math.sqrt(rest) : rest / lower[j * size + j]!;
    }
  }
  return lower;
}
