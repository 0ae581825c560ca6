import type { LineProfile } from "./line_profile.ts";

/** A profile without gaps, smoothed by a Gaussian at any velocity. */
export interface WingScan {
  /** Flux-weighted mean velocity, km/s; NaN when the net flux vanishes. */
  readonly mean_kms: number;
  /** Range of velocities that hold data, km/s. */
  readonly range_kms: readonly [number, number];
  /** Σ s g(v − at) Δv and its derivative by `at`, exactly. */
  smooth(at: number): readonly [value: number, slope: number];
  /** The same by interpolation from a grid; a few parts in 1e5. */
  quick(at: number): number;
  /** Whether a window of half-width `reach` about a velocity is free of long gaps. */
  covers(at: number, reach: number): boolean;
  /** Kernel g(v − at) Δv on every pixel, N values, into `out` with a factor. */
  addKernel(at: number, factor: number, out: Float64Array): void;
  /** Variance of every pixel, N values. */
  readonly variance: Float64Array;
}

/** Fills masked pixels from their neighbours; returns long gaps as intervals. */
function fillGaps(profile: LineProfile, longest: number) {
  const { velocity_kms, pixel_kms, error } = profile;
  const flux = profile.flux.slice();
  const variance = error.map((e) => e * e);
  const gaps: [number, number][] = [];
  const count = flux.length;
  for (let k = 0; k < count; k++) {
    if (error[k]! < Infinity) continue;
    const from = k;
    while (k + 1 < count && error[k + 1] === Infinity) k++;
    const [left, right] = [from - 1, k + 1];
    const low = velocity_kms[from]! - pixel_kms[from]! / 2;
    const high = velocity_kms[k]! + pixel_kms[k]! / 2;
    const long = high - low > longest || left < 0 || right >= count;
    if (long) gaps.push([low, high]);
    for (let j = from; j <= k; j++) {
      if (long) {
        flux[j] = variance[j] = 0;
        continue;
      }
      const share = (velocity_kms[j]! - velocity_kms[left]!) /
        (velocity_kms[right]! - velocity_kms[left]!);
      flux[j] = (1 - share) * flux[left]! + share * flux[right]!;
      variance[j] = (variance[left]! + variance[right]!) / 2;
    }
  }
  return { flux, variance, gaps };
}

/** First index at which an increasing array reaches a value. */
function lowerBound(values: Float64Array, at: number): number {
  let low = 0, high = values.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (values[middle]! < at) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * Prepares a profile for sums over Gaussian windows. Gaps of masked pixels up to half a window's
 * standard deviation are bridged by straight lines; longer ones are remembered.
 *
 * @param profile The profile.
 * @param sigma_kms Standard deviation of the window, km/s.
 * @returns The smoothed profile as functions of velocity.
 */
export function scanWings(profile: LineProfile, sigma_kms: number): WingScan {
  const { velocity_kms, pixel_kms } = profile;
  const { flux, variance, gaps } = fillGaps(profile, sigma_kms / 2);
  const count = flux.length;
  const reach = 8 * sigma_kms;
  let net = 0, moment = 0;
  for (let k = 0; k < count; k++) {
    net += flux[k]! * pixel_kms[k]!;
    moment += flux[k]! * pixel_kms[k]! * velocity_kms[k]!;
  }
  const smooth = (at: number): [number, number] => {
    let value = 0, slope = 0;
    for (let k = lowerBound(velocity_kms, at - reach); k < count; k++) {
      const u = (velocity_kms[k]! - at) / sigma_kms;
      if (u > 8) break;
      const part = flux[k]! * pixel_kms[k]! * Math.exp(-0.5 * u * u);
      value += part;
      slope += part * u / sigma_kms;
    }
    return [value, slope];
  };
  const range_kms = [
    velocity_kms[0]! - pixel_kms[0]! / 2,
    velocity_kms[count - 1]! + pixel_kms[count - 1]! / 2,
  ] as const;
  const step = sigma_kms / 5;
  const nodes = Math.ceil((range_kms[1] - range_kms[0]) / step) + 1;
  const values = new Float64Array(nodes), slopes = new Float64Array(nodes);
  // From node to node the exponent u²/2 grows by (u + ½h)h, the next time by h² more: two exponentials
  // a pixel in place of one for every node that it reaches. 6 σ leave 2e-8, less than interpolation.
  const h = step / sigma_kms;
  const shrink = Math.exp(-h * h);
  for (let k = 0; k < count; k++) {
    const place = (velocity_kms[k]! - range_kms[0]) / step;
    const first = Math.max(0, Math.ceil(place - 6 / h));
    const last = Math.min(nodes - 1, Math.floor(place + 6 / h));
    let u = (first - place) * h;
    let part = flux[k]! * pixel_kms[k]! * Math.exp(-0.5 * u * u);
    let ratio = Math.exp(-(u + 0.5 * h) * h);
    for (let n = first; n <= last; n++) {
      values[n]! += part;
      slopes[n]! -= part * u / sigma_kms;
      u += h;
      part *= ratio;
      ratio *= shrink;
    }
  }
  return {
    mean_kms: net === 0 ? NaN : moment / net,
    range_kms,
    variance,
    smooth,
    quick(at) {
      const place = (at - range_kms[0]) / step;
      const n = Math.min(nodes - 2, Math.max(0, Math.floor(place)));
      const t = place - n, u = 1 - t;
      return values[n]! * (1 + 2 * t) * u * u + values[n + 1]! * (1 + 2 * u) * t * t +
        step * (slopes[n]! * t * u * u - slopes[n + 1]! * t * t * u);
    },
    covers(at, half) {
      if (at - half < range_kms[0] || at + half > range_kms[1]) return false;
      return gaps.every(([low, high]) => high < at - half || low > at + half);
    },
    addKernel(at, factor, out) {
      for (let k = lowerBound(velocity_kms, at - reach); k < count; k++) {
        const u = (velocity_kms[k]! - at) / sigma_kms;
        if (u > 8) break;
        out[k]! += factor * pixel_kms[k]! * Math.exp(-0.5 * u * u);
      }
    },
  };
}
