/**
 * Error of an equivalent width by the formula of Vollmann & Eversberg (2006, Astron. Nachr. 327,
 * 862, eq. 7): σ(W) = √(1 + Fc/F) (Δ − W) / (S/N), for photon noise and a continuum seen over as
 * many pixels as the line.
 *
 * Their W is positive in absorption, and their S/N is that of the averages over the interval: the
 * pixel's, times the root of the number of pixels. Taking the pixel's own S/N is a common mistake,
 * and makes errors of a wide line ten times too large.
 *
 * @param width Equivalent width, emission positive, in any unit.
 * @param options Width of the interval in that unit, S/N of the continuum in one pixel, number of
 * pixels in the interval.
 * @returns One standard deviation, in the same unit.
 *
 * @example
 * ```ts
 * import { equivalentWidthError } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // No line at all: √2 Δ / (S/N √M).
 * const error = equivalentWidthError(0, { interval: 50, signal_to_noise: 20, pixels: 100 });
 * assertAlmostEquals(error, Math.SQRT2 * 50 / 200);
 * ```
 */
export function equivalentWidthError(
  width: number,
  options: {
    readonly interval: number;
    readonly signal_to_noise: number;
    readonly pixels: number;
  },
): number {
  const { interval, signal_to_noise, pixels } = options;
  const mean = 1 + width / interval;
  return Math.sqrt(1 + 1 / mean) * interval * mean / (signal_to_noise * Math.sqrt(pixels));
}
