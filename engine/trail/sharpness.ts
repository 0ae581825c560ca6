import type { TrailRow } from "./cosmic_rays.ts";
import { FWHM_OVER_SIGMA } from "./profile_width.ts";

/** How far runs of pixels stand out more sharply than the instrument can draw anything. */
export interface Sharpness {
  /**
   * For the run that begins at each pixel, its mean above what the pixels on either side allow, N
   * values; −Infinity where a pixel is masked or the run passes the end.
   */
  readonly excess: Float64Array;
  /** One standard deviation of it, N values. */
  readonly sigma: Float64Array;
}

// The lowest usable pixel within so many pixels of each: beyond the skirts of a point of light.
function runningMinimum({ flux, error }: TrailRow, half: number): Float64Array {
  return flux.map((_, i) => {
    let low = Infinity;
    for (let k = Math.max(0, i - half); k <= Math.min(flux.length - 1, i + half); k++) {
      if (Number.isFinite(error[k]!)) low = Math.min(low, flux[k]!);
    }
    return low;
  });
}

/**
 * Compares runs of pixels with the pixels on either side of them. Light that came through the
 * spectrograph is positive and spread by its profile, here a Gaussian of standard deviation s: then
 * the mean of m pixels is at most a fixed number of times the mean of the two beside them, and the
 * most when a point of light stands in the middle. What is sharper struck the detector itself (the
 * argument of van Dokkum 2001, PASP 113, 1420, in one dimension).
 *
 * @param row The exposure.
 * @param options Pixels in a run; one standard deviation of each pixel.
 * @returns Excess and its noise for every run. Levels are taken above the lowest pixel near by, so
 * that neither slopes nor troughs of the line stand out.
 *
 * @example
 * ```ts
 * import { sharpness } from "@millrace/millrace/trail";
 * import { assert } from "@std/assert";
 *
 * const pixels = Array.from({ length: 21 }, (_, i) => i - 10);
 * const row = (flux: number[]) => ({
 *   velocity_kms: Float64Array.from(pixels),
 *   flux: Float64Array.from(flux),
 *   error: new Float64Array(21).fill(0.1),
 *   orbit: 0,
 *   profile_pixels: 2.4,
 *   group: 0,
 * });
 * const options = { pixels: 2, error: new Float64Array(21).fill(0.1) };
 * const light = row(pixels.map((x) => 5 * Math.exp(-0.5 * (x / 1.02) ** 2)));
 * assert(Math.max(...sharpness(light, options).excess) <= 0);
 * const hit = row(pixels.map((x) => x === 0 || x === 1 ? 3 : 0));
 * assert(sharpness(hit, options).excess[10]! > 2.9);
 * ```
 */
export function sharpness(
  row: TrailRow,
  options: { readonly pixels: number; readonly error: Float64Array },
): Sharpness {
  const { pixels: m, error } = options;
  const { flux, profile_pixels } = row;
  const s = profile_pixels / FWHM_OVER_SIGMA;
  const shape = (x: number) => Math.exp(-0.5 * (x / s) ** 2);
  const half = (m - 1) / 2;
  let inside = 0;
  for (let k = 0; k < m; k++) inside += shape(k - half) / m;
  // Infinite where the profile is much narrower than a pixel: nothing is too sharp then.
  const most = inside / shape(half + 1);

  const excess = new Float64Array(flux.length).fill(-Infinity);
  const sigma = new Float64Array(flux.length).fill(Infinity);
  if (!Number.isFinite(most)) return { excess, sigma };
  const lowest = runningMinimum(row, Math.ceil(1.5 * profile_pixels));
  for (let i = 1; i + m < flux.length; i++) {
    let sum = 0, variance = 0, masked = false;
    let low = Infinity;
    for (let k = i - 1; k <= i + m; k++) {
      masked ||= !Number.isFinite(row.error[k]!);
      low = Math.min(low, lowest[k]!);
      if (k < i || k === i + m) continue;
      sum += flux[k]! / m;
      variance += (error[k]! / m) ** 2;
    }
    if (masked) continue;
    const beside = 0.5 * (flux[i - 1]! + flux[i + m]!);
    const noise = 0.25 * (error[i - 1]! ** 2 + error[i + m]! ** 2);
    excess[i] = sum - low - most * (beside - low);
    sigma[i] = Math.sqrt(variance + most ** 2 * noise);
  }
  return { excess, sigma };
}
