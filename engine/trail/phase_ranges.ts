/** A range of phases, cycles: it may pass 0 or 1, as in [0.95, 1.05]. */
export type PhaseRange = readonly [from: number, to: number];

/**
 * Whether a phase lies in one of some ranges, counted modulo one cycle.
 *
 * @param phase Phase, cycles.
 * @param ranges Ranges of phase.
 * @returns True when it lies in one.
 *
 * @example
 * ```ts
 * import { inPhaseRanges } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals([0.02, 0.97, 0.5].map((phase) => inPhaseRanges(phase, [[0.95, 1.05]])), [true, true, false]);
 * ```
 */
export function inPhaseRanges(phase: number, ranges: readonly PhaseRange[]): boolean {
  return ranges.some(([from, to]) => {
    const past = phase - from - Math.floor(phase - from);
    return past <= to - from;
  });
}
