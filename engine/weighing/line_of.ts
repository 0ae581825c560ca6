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
