/**
 * Brings a phase into [0, 1).
 *
 * @param phase Phase in cycles.
 * @returns The same phase, from 0 to just below 1.
 *
 * @example
 * ```ts
 * import { wrapPhase } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(wrapPhase(-0.25), 0.75);
 * assertEquals(wrapPhase(-1e-20), 0);
 * ```
 */
export function wrapPhase(phase: number): number {
  const wrapped = phase - Math.floor(phase);
  // A tiny negative phase rounds up to 1; adding 0 turns −0 into 0.
  return wrapped >= 1 ? 0 : wrapped + 0;
}

/**
 * Shortest way from one phase to another, in [−0.5, 0.5).
 *
 * @param later Phase in cycles.
 * @param earlier Phase in cycles.
 * @returns `later − earlier` modulo 1.
 *
 * @example
 * ```ts
 * import { phaseDifference } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(phaseDifference(0.05, 0.95), 0.1, 1e-15);
 * ```
 */
export function phaseDifference(later: number, earlier: number): number {
  return wrapPhase(later - earlier + 0.5) - 0.5;
}

/**
 * Mean of phases on the circle: the direction of the vector sum.
 *
 * @param phases Phases in cycles.
 * @returns Mean phase in [0, 1) and the length of the mean vector, from 0 (spread evenly; the mean then
 * says nothing) to 1 (all the same).
 *
 * @example
 * ```ts
 * import { circularMean } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(circularMean([0.9, 0.98, 0.06]).phase, 0.98, 1e-12);
 * ```
 */
export function circularMean(phases: ArrayLike<number>): { phase: number; length: number } {
  let x = 0, y = 0;
  for (let i = 0; i < phases.length; i++) {
    x += Math.cos(2 * Math.PI * phases[i]!);
    y += Math.sin(2 * Math.PI * phases[i]!);
  }
  const length = phases.length === 0 ? 0 : Math.hypot(x, y) / phases.length;
  return { phase: wrapPhase(Math.atan2(y, x) / (2 * Math.PI)), length };
}
