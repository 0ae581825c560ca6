import type { TrailSamples } from "./check_trail.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";

/** Options of {@linkcode profileMoments}. */
export interface ProfileMomentsOptions {
  /** Systemic velocity γ that the moments are taken about, km/s. */
  readonly systemic_kms: number;
  /** Half the range of velocities that counts; also the unit of velocity. */
  readonly half_range_kms: number;
  /**
   * Highest moment, N.
   *
   * @default {3}
   */
  readonly order?: number;
  /**
   * Error of each exposure's continuum level, relative; P values. It multiplies line and continuum.
   *
   * @default {none}
   */
  readonly continuum_error?: Float64Array | null;
}

/** Moments of one exposure's profile. */
export interface ProfileMoments {
  /** Index of the exposure. */
  readonly exposure: number;
  /** ∫ (v/R)ⁿ f dv for n = 0 … N, km/s, the instrumental profile taken out; R is the half-range. */
  readonly moment: Float64Array;
  /** Their covariance, (N + 1)² row-major. */
  readonly covariance: Float64Array;
}

/** Widest masked gap that is bridged, over the profile's σ. */
const BRIDGE = 2;

/**
 * Moments of every exposure's profile about the systemic velocity. Masked samples are bridged
 * linearly; an exposure whose range is not covered, or where a masked gap is wider than two σ of
 * the profile, has none.
 *
 * @param trail Exposures, data, errors.
 * @param options Systemic velocity, range, highest moment.
 * @returns Moments of the exposures that have them, in order.
 *
 * @example
 * ```ts
 * import { profileMoments } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 101 }, (_, k) => 10 * (k - 50));
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 101),
 *   velocity_kms,
 *   pixel_kms: new Float64Array(101).fill(10),
 *   profile_sigma_kms: Float64Array.of(20),
 * };
 * const flux = velocity_kms.map((v) => Math.exp(-0.5 * ((v - 100) / 40) ** 2));
 * const [first] = profileMoments({ sampling, flux, error: flux.map(() => 0.1) }, {
 *   systemic_kms: 0,
 *   half_range_kms: 400,
 * });
 * const [m0 = NaN, m1 = NaN, m2 = NaN] = first!.moment;
 * assertAlmostEquals(400 * m1 / m0, 100, 1e-6);
 * assertAlmostEquals(400 ** 2 * m2 / m0 - 100 ** 2, 40 ** 2 - 20 ** 2, 1e-3);
 * ```
 */
export function profileMoments(
  trail: TrailSamples,
  options: ProfileMomentsOptions,
): ProfileMoments[] {
  const { sampling, flux, error } = trail;
  const { systemic_kms, half_range_kms, order = 3, continuum_error = null } = options;
  const shift = systemFrame(systemic_kms);
  const velocity = shiftVelocities(sampling.velocity_kms, shift);
  const found: ProfileMoments[] = [];
  for (let i = 0; i < sampling.count; i++) {
    const sigma = sampling.profile_sigma_kms[i]! * shift.factor / half_range_kms;
    const share = quadrature(trail, { i, velocity, half_range_kms, sigma, factor: shift.factor });
    if (share === null) continue;
    const size = order + 1;
    const raw = new Float64Array(size), covariance = new Float64Array(size * size);
    const level = new Float64Array(size), power = new Float64Array(size);
    const from = sampling.start[i]!;
    share.forEach((w, j) => {
      if (w === 0) return;
      const k = from + j, x = velocity[k]! / half_range_kms;
      for (let n = 0, p = w; n < size; n++, p *= x) power[n] = p;
      for (let n = 0; n < size; n++) {
        raw[n] = raw[n]! + power[n]! * flux[k]!;
        level[n] = level[n]! + power[n]! * (1 + flux[k]!);
        for (let m = 0; m < size; m++) {
          const at = n * size + m;
          covariance[at] = covariance[at]! + power[n]! * power[m]! * error[k]! ** 2;
        }
      }
    });
    const off = continuum_error?.[i] ?? 0;
    for (let n = 0; n < size; n++) {
      for (let m = 0; m < size; m++) {
        const at = n * size + m;
        covariance[at] = covariance[at]! + off * off * level[n]! * level[m]!;
      }
    }
    const without = profileRemoval(size, sigma);
    found.push({
      exposure: i,
      moment: multiply(without, raw, { rows: size, inner: size, columns: 1 }),
      covariance: sandwich(without, covariance, size),
    });
  }
  return found;
}

/** Width of velocity that each sample of an exposure stands for; null where the range is not covered. */
function quadrature(
  trail: TrailSamples,
  { i, velocity, half_range_kms, sigma, factor }: {
    readonly i: number;
    readonly velocity: Float64Array;
    readonly half_range_kms: number;
    readonly sigma: number;
    readonly factor: number;
  },
): Float64Array | null {
  const { sampling, error } = trail;
  const from = sampling.start[i]!, to = sampling.start[i + 1]!;
  const share = new Float64Array(to - from);
  const widest = BRIDGE * sigma * half_range_kms;
  let last = -1;
  let low = Infinity, high = -Infinity;
  for (let k = from; k < to; k++) {
    const width = sampling.pixel_kms[k]! * factor;
    low = Math.min(low, velocity[k]! - 0.5 * width);
    high = Math.max(high, velocity[k]! + 0.5 * width);
    if (Math.abs(velocity[k]!) > half_range_kms) continue;
    if (!(error[k]! < Infinity)) continue;
    share[k - from] = share[k - from]! + width;
    if (last >= 0 && k - last > 1) {
      if (velocity[k]! - velocity[last]! > widest + 2 * width) return null;
      for (let j = last + 1; j < k; j++) {
        const p = (velocity[j]! - velocity[last]!) / (velocity[k]! - velocity[last]!);
        const gap = sampling.pixel_kms[j]! * factor;
        share[last - from] = share[last - from]! + (1 - p) * gap;
        share[k - from] = share[k - from]! + p * gap;
      }
    } else if (last < 0 && velocity[k]! > -half_range_kms + widest + 2 * width) return null;
    last = k;
  }
  if (last < 0 || low > -half_range_kms || high < half_range_kms) return null;
  return velocity[last]! < half_range_kms - widest - 2 * sampling.pixel_kms[last]! ? null : share;
}

/**
 * Moments of f from those of f convolved with a Gaussian: ∫ vⁿ f = Σ binomial(n, k) μ_k M_{n−k} with
 * the moments of a Gaussian of variance −σ² (its inverse in the sense of moments).
 */
function profileRemoval(size: number, sigma: number): Float64Array {
  const matrix = new Float64Array(size * size);
  for (let n = 0; n < size; n++) {
    let binomial = 1, mu = 1;
    for (let k = 0; k <= n; k++) {
      if (k % 2 === 0) matrix[n * size + n - k] = binomial * mu;
      binomial = binomial * (n - k) / (k + 1);
      if (k % 2 === 1) mu *= -k * sigma * sigma;
    }
  }
  return matrix;
}

function multiply(
  a: Float64Array,
  b: Float64Array,
  { rows, inner, columns }: {
    readonly rows: number;
    readonly inner: number;
    readonly columns: number;
  },
): Float64Array {
  const out = new Float64Array(rows * columns);
  for (let r = 0; r < rows; r++) {
    for (let k = 0; k < inner; k++) {
      for (let c = 0; c < columns; c++) {
        out[r * columns + c] = out[r * columns + c]! + a[r * inner + k]! * b[k * columns + c]!;
      }
    }
  }
  return out;
}

function sandwich(a: Float64Array, middle: Float64Array, size: number): Float64Array {
  const square = { rows: size, inner: size, columns: size };
  const turned = a.map((_, k) => a[(k % size) * size + Math.floor(k / size)]!);
  return multiply(multiply(a, middle, square), turned, square);
}
