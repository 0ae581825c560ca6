import type { ParameterScan } from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import { nightsOf } from "../subject/nights.ts";

/** What comes of a period that has one cycle more or less between nights. */
export interface CycleSlip {
  /** Cycles more between the nights: 1 or −1. */
  readonly cycles: number;
  /** Cycles between the middles of the nights, by the period that was found. */
  readonly gap_cycles: number;
  /** The best such period, d. */
  readonly period_d: number;
  /** χ² − αS there, over that of the period that was found. */
  readonly excess: number;
}

/** Gaps that differ by less, relatively, are one. */
const ALIKE = 0.1;

/** Most gaps that are looked at, shortest first. */
const MOST_GAPS = 3;

/** Over fewer cycles a cycle more is no slip but another period altogether. */
const LEAST_CYCLES = 2;

/**
 * Gaps between the nights of a trail over which a cycle may have slipped.
 *
 * @param sampling Cycles and phases of the exposures.
 * @param options The period.
 * @param options.period_d Period, d.
 * @returns Cycles from the middle of one night to that of the next: gaps that differ, shortest first, three
 * at most.
 */
export function nightGaps(
  sampling: Pick<Trail["sampling"], "cycle" | "phase">,
  options: { period_d: number },
): number[] {
  const orbits = Array.from(sampling.phase, (phase, i) => phase + sampling.cycle[i]!);
  const order = orbits.map((_, i) => i).sort((a, b) => orbits[a]! - orbits[b]!);
  const night = nightsOf({
    cycle: Float64Array.from(order, (i) => sampling.cycle[i]!),
    phase: Float64Array.from(order, (i) => sampling.phase[i]!),
  }, options);
  const middles = Array.from({ length: (night.at(-1) ?? -1) + 1 }, (_, n) => {
    const those = order.filter((_, k) => night[k] === n).map((i) => orbits[i]!);
    return those.reduce((a, b) => a + b, 0) / those.length;
  });
  const gaps: number[] = [];
  for (let n = 1; n < middles.length; n++) gaps.push(middles[n]! - middles[n - 1]!);
  const kept: number[] = [];
  for (const gap of gaps.sort((a, b) => a - b)) {
    if (gap < LEAST_CYCLES || kept.some((one) => Math.abs(gap / one - 1) < ALIKE)) continue;
    kept.push(gap);
  }
  return kept.slice(0, MOST_GAPS);
}

/** Points of each look at a slip, and how much nearer the next one is. */
const POINTS = [-2, -1, 0, 1, 2], NEARER = 4;

/** Looks at a slip, as long as it may turn out to fit. */
const LOOKS = 3;

/** A slip that fits worse than this is not looked at again. */
const FAR = 60;

/**
 * Tries periods with one cycle more or less over a gap. The middle of a night is not known better than
 * to a fraction of a cycle, and with it the slipped period: a few are tried about it.
 *
 * @param gap_d From the middle of one night to that of the next, d.
 * @param options What was found, and how periods are tried.
 * @param options.period_d The period that was found, d.
 * @param options.least Its χ² − αS.
 * @param options.scan Tries periods, d.
 * @returns Both slips.
 */
export function cycleSlips(
  gap_d: number,
  options: {
    period_d: number;
    least: number;
    scan: (values: readonly number[]) => ParameterScan;
  },
): CycleSlip[] {
  const { period_d, least, scan } = options;
  const gap_cycles = gap_d / period_d;
  return [-1, 1].map((cycles): CycleSlip => {
    let middle = period_d / (1 + cycles / gap_cycles);
    let step = 0.3 * period_d / gap_cycles ** 2;
    let best = { value: middle, objective: Infinity };
    for (let look = 0; look < LOOKS; look++) {
      const tried = scan(POINTS.map((part) => middle + part * step));
      const at = tried.objective.reduce((m, y, i) => y < tried.objective[m]! ? i : m, 0);
      // A parabola through points that do not bend like one may go below them all.
      const value = tried.best ?? tried.values[at]!;
      if (tried.objective[at]! < best.objective) best = { value, objective: tried.objective[at]! };
      if (best.objective - least > FAR) break;
      middle = value;
      step /= tried.shape === "edge" ? 1 : NEARER;
    }
    return {
      cycles,
      gap_cycles,
      period_d: best.value,
      excess: best.objective - least,
    };
  });
}
