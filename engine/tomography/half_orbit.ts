import { median } from "../numerics/mod.ts";

/** Options of {@linkcode halfOrbitIntervals}. */
export interface HalfOrbitOptions {
  /**
   * Largest interval, over the median one: an exposure beside a gap does not stand for all of it.
   *
   * @default {2}
   */
  readonly cap?: number;
}

/**
 * The share of the half orbit that each exposure stands for: half the way to its neighbours. For
 * transparent gas a profile and its mirror image half an orbit later say the same, so phases are
 * taken modulo half an orbit.
 *
 * @param phase Phases, cycles.
 * @param options Cap on one exposure's share.
 * @returns Intervals in cycles, in the order given; they add up to 0.5 where nothing was capped.
 *
 * @example
 * ```ts
 * import { halfOrbitIntervals } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const [a = NaN, b = NaN] = halfOrbitIntervals(Float64Array.of(0.1, 0.85));
 * assertAlmostEquals(a, 0.25, 1e-12); // 0.1 and 0.35 modulo a half
 * assertAlmostEquals(b, 0.25, 1e-12);
 * ```
 */
export function halfOrbitIntervals(
  phase: Float64Array,
  options: HalfOrbitOptions = {},
): Float64Array {
  const { cap = 2 } = options;
  const count = phase.length;
  const intervals = new Float64Array(count);
  const order = sortedHalfPhases(phase);
  order.forEach(({ index }, k) => {
    const before = k === 0 ? order[count - 1]!.half - 0.5 : order[k - 1]!.half;
    const after = k === count - 1 ? order[0]!.half + 0.5 : order[k + 1]!.half;
    intervals[index] = 0.5 * (after - before);
  });
  const limit = count > 2 ? cap * median(intervals) : Infinity;
  return limit > 0 ? intervals.map((d) => Math.min(d, limit)) : intervals;
}

/**
 * The widest stretch of the half orbit without an exposure, between mid-exposures.
 *
 * @param phase Phases, cycles.
 * @returns Gap in cycles, at most 0.5.
 *
 * @example
 * ```ts
 * import { largestHalfOrbitGap } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(largestHalfOrbitGap(Float64Array.of(0, 0.1, 0.7)), 0.3, 1e-12);
 * ```
 */
export function largestHalfOrbitGap(phase: Float64Array): number {
  const order = sortedHalfPhases(phase);
  const last = order[order.length - 1];
  if (last === undefined) return 0.5;
  let widest = order[0]!.half + 0.5 - last.half;
  for (let k = 1; k < order.length; k++) {
    widest = Math.max(widest, order[k]!.half - order[k - 1]!.half);
  }
  return widest;
}

function sortedHalfPhases(phase: Float64Array): { index: number; half: number }[] {
  return Array.from(phase, (p, index) => ({ index, half: p - 0.5 * Math.floor(2 * p) }))
    .sort((a, b) => a.half - b.half || a.index - b.index);
}
