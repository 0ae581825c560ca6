import type { PartName } from "../synthesis/mod.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import type { ParameterState } from "./parameter_state.ts";
import type { Problem } from "./problem.ts";

/**
 * The line that a fit says, before noise and baselines: the trail of each part.
 *
 * @param problem The problem.
 * @param fit The fit.
 * @param state Another state to compute it at.
 * @default state The fit's own
 * @returns One trail of N samples per part, in units of the data.
 *
 * @example
 * ```ts
 * import {
 *   partLines,
 *   prepareProblem,
 *   simulateTrail,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const lines = partLines(prepared.problem, prepared.richest);
 * assertEquals([...lines.keys()], ["disc", "spot"]);
 * ```
 */
export function partLines(
  problem: Problem,
  fit: HypothesisFit,
  { state = fit.state }: { readonly state?: ParameterState } = {},
): ReadonlyMap<PartName, Float64Array> {
  const lines = new Map<PartName, Float64Array>();
  for (const [part, amplitudes] of fit.evaluation.amplitudes) {
    const line = new Float64Array(problem.observed.length);
    const trails = problem.templates.raw(part, state);
    trails?.forEach((trail, j) => {
      const amplitude = amplitudes[j]!;
      for (let n = 0; n < line.length; n++) line[n]! += amplitude * trail[n]!;
    });
    lines.set(part, line);
  }
  return lines;
}

/**
 * The line that a fit says, all parts together.
 *
 * @param problem The problem.
 * @param fit The fit.
 * @param options As for the parts.
 * @returns N samples, in units of the data.
 *
 * @example
 * ```ts
 * import {
 *   lineOf,
 *   prepareProblem,
 *   simulateTrail,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const line = lineOf(prepared.problem, prepared.richest);
 * assertEquals(line.length, trail.flux.length);
 * ```
 */
export function lineOf(
  problem: Problem,
  fit: HypothesisFit,
  options: { readonly state?: ParameterState } = {},
): Float64Array {
  const sum = new Float64Array(problem.observed.length);
  for (const line of partLines(problem, fit, options).values()) {
    for (let n = 0; n < sum.length; n++) sum[n]! += line[n]!;
  }
  return sum;
}
