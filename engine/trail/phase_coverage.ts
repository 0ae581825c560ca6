/** How well exposures cover the orbit. */
export interface PhaseCoverage {
  /** Fraction of the orbit during which a shutter was open at least once. */
  readonly covered_fraction: number;
  /** The same modulo half an orbit: for gas that is transparent a profile and its mirror say the same. */
  readonly covered_half_fraction: number;
  /** Longest stretch of phase without an exposure, cycles; 0 when there is none. */
  readonly largest_gap: number;
  /** Phase at which that stretch begins; null when there is none. */
  readonly largest_gap_from: number | null;
  /** The same modulo half an orbit, cycles. */
  readonly largest_half_gap: number;
  /** Number of exposures open in each of equal bins of phase, first bin from phase 0. */
  readonly exposures_in_bin: readonly number[];
}

type Interval = readonly [from: number, to: number];

// Joins intervals on a circle of some length, cut at its end.
function joined(intervals: readonly Interval[], length: number): Interval[] {
  const cut = intervals.flatMap(([from, to]): Interval[] => {
    if (to - from >= length) return [[0, length]];
    const a = from - length * Math.floor(from / length);
    const b = a + to - from;
    return b > length ? [[a, length], [0, b - length]] : [[a, b]];
  }).sort((x, y) => x[0] - y[0]);
  const out: [number, number][] = [];
  for (const [a, b] of cut) {
    const last = out.at(-1);
    if (last !== undefined && a <= last[1] + 1e-12) last[1] = Math.max(last[1], b);
    else out.push([a, b]);
  }
  return out;
}

function gapOf(covered: readonly Interval[], length: number): { gap: number; from: number | null } {
  if (covered.length === 0) return { gap: length, from: 0 };
  let gap = 0;
  let from: number | null = null;
  covered.forEach(([, end], i) => {
    const next = covered[i + 1]?.[0] ?? covered[0]![0] + length;
    if (next - end > gap + 1e-9) {
      gap = next - end;
      from = end % length;
    }
  });
  return { gap, from };
}

/**
 * Measures how exposures cover the orbit.
 *
 * @param exposures Phase at mid-exposure and width of each, cycles.
 * @param bins Number of bins of the count.
 * @returns The coverage.
 *
 * @example Two exposures of a quarter of an orbit
 * ```ts
 * import { phaseCoverage } from "@millrace/millrace/trail";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const coverage = phaseCoverage({
 *   phase: Float64Array.of(0.125, 0.625),
 *   phase_width: Float64Array.of(0.25, 0.25),
 * }, 4);
 * assertAlmostEquals(coverage.covered_fraction, 0.5);
 * assertAlmostEquals(coverage.covered_half_fraction, 0.5);
 * assertEquals(coverage.exposures_in_bin, [1, 0, 1, 0]);
 * ```
 */
export function phaseCoverage(
  exposures: { readonly phase: Float64Array; readonly phase_width: Float64Array },
  bins = 40,
): PhaseCoverage {
  const open = Array.from(exposures.phase, (phase, i): Interval => {
    const half = 0.5 * exposures.phase_width[i]!;
    return [phase - half, phase + half];
  });
  const whole = joined(open, 1);
  const half = joined(open, 0.5);
  const length = (intervals: readonly Interval[]) =>
    intervals.reduce((sum, [a, b]) => sum + b - a, 0);
  const { gap, from } = gapOf(whole, 1);
  const count = Array.from({ length: bins }, (_, b) => {
    const [low, high] = [b / bins, (b + 1) / bins];
    return open.filter((each) =>
      joined([each], 1).some(([x, y]) => x < high - 1e-9 && y > low + 1e-9)
    ).length;
  });
  return {
    covered_fraction: length(whole),
    covered_half_fraction: 2 * length(half),
    largest_gap: gap,
    largest_gap_from: from,
    largest_half_gap: gapOf(half, 0.5).gap,
    exposures_in_bin: count,
  };
}
