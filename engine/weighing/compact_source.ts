import { minimise } from "../numerics/mod.ts";
import { dot } from "./brightnesses.ts";
import { compactTrail } from "./compact_trail.ts";
import type { DetectionSearch } from "./detection_limit.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import { stateOf } from "./parameter_state.ts";
import { evaluate, type Problem } from "./problem.ts";

/** The strongest compact excess over a fitted model, wherever it is in the map. */
export interface StrongestSource {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** Standard deviations and covariance of the place by noise alone: xx, xy, yy, (km/s)². */
  readonly covariance: readonly [xx: number, xy: number, yy: number];
  /** Standard deviation of its own velocities, km/s. */
  readonly sigma_kms: number;
  /** Share of the line's light. */
  readonly flux_fraction: number;
  /** Largest signal to noise of the search's places: not a significance, see `false_alarm`. */
  readonly signal: number;
  /** How often noise alone gives as much somewhere in the square. */
  readonly false_alarm: {
    /** (k + 1) / (N + 1). */
    readonly value: number;
    /** Binomial standard deviation. */
    readonly error: number;
    /** Number of trials, N. */
    readonly trials: number;
  };
}

/**
 * Looks for a compact source everywhere in the map, on top of a fitted model that lacks it.
 *
 * @param problem The problem.
 * @param options The fit, and the search that a detection limit made.
 * @returns The strongest source, whether it is significant or not; null when there is no excess.
 *
 * @example
 * ```ts
 * import {
 *   compareHypotheses,
 *   detectionLimit,
 *   noiseBank,
 *   prepareProblem,
 *   simulateTrail,
 *   strongestSource,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assert } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc", "spot"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { problem, richest, line_scale } = prepared;
 * const { fit, fit_errors } = compareHypotheses(prepared, [["disc"]]).hypotheses[0]!;
 * const bank = noiseBank(problem, richest, { line_scale });
 * const grid = { cells: 7, half_width_kms: 900 };
 * const search = detectionLimit(problem, { fit, fit_errors, bank, grid, trials: 20 });
 * const source = strongestSource(problem, { fit, search })!;
 * assert(source.vx_kms < -100 && source.vy_kms > 100); // upper left, where the stream strikes
 * ```
 */
export function strongestSource(
  problem: Problem,
  { fit, search }: {
    readonly fit: HypothesisFit;
    readonly search: DetectionSearch;
  },
): StrongestSource | null {
  const { residual } = fit.evaluation;
  let best = search.cells[0]!;
  let signal = 0;
  for (const cell of search.cells) {
    const here = dot(cell.filter, residual);
    if (here > signal) [best, signal] = [cell, here];
  }
  if (!(signal > 0)) return null;

  // The source and everything else together: a strong one moves the fit it was looked for on.
  const { parameters, hypothesis, values } = fit;
  const { sampling } = problem.data;
  const { sigma_kms, cells, half_width_kms } = search.limit;
  const state = stateOf(hypothesis, { setup: problem.setup, parameters });
  const size = parameters.length;
  const solve = (all: Float64Array) => {
    const here = state(all);
    const { systemic_kms, phase } = here;
    const source = { vx_kms: all[size]!, vy_kms: all[size + 1]!, sigma_kms: all[size + 2]! };
    const trail = compactTrail(source, { sampling, systemic_kms, phase });
    return evaluate(problem, { hypothesis, state: here, extra: problem.whitening.apply(trail) });
  };
  const priors = parameters.flatMap(({ prior, start }, j) =>
    prior === null ? [] : [{ j, centre: start, sigma: prior }]
  );
  const step = 3 * half_width_kms / (cells - 1);
  const found = minimise(
    (all) => {
      const made = solve(all);
      const out = new Float64Array(residual.length + priors.length).fill(NaN);
      if (made === null) return out;
      out.set(made.residual);
      priors.forEach(({ j, centre, sigma }, i) => {
        out[residual.length + i] = (all[j]! - centre) / sigma;
      });
      return out;
    },
    Float64Array.of(...values, best.vx_kms, best.vy_kms, sigma_kms),
    {
      lower: [...parameters.map(({ low }) => low), best.vx_kms - step, best.vy_kms - step, 10],
      upper: [...parameters.map(({ high }) => high), best.vx_kms + step, best.vy_kms + step, 300],
      typical: [...parameters.map(({ typical }) => typical), sigma_kms, sigma_kms, sigma_kms],
      tolerance: 1e-6,
      max_iterations: 40,
    },
  );
  const reached = solve(found.parameters)!;
  let light = reached.extra;
  for (const [width] of reached.amplitudes.values()) light += width!;
  const { largest } = search;
  const exceeding = largest.filter((value) => value >= signal).length;
  const value = (exceeding + 1) / (largest.length + 1);
  const entry = (a: number, b: number) => found.covariance.get(size + a, size + b);
  return {
    vx_kms: found.parameters[size]!,
    vy_kms: found.parameters[size + 1]!,
    sigma_kms: found.parameters[size + 2]!,
    covariance: [entry(0, 0), entry(0, 1), entry(1, 1)],
    flux_fraction: reached.extra / light,
    signal,
    false_alarm: {
      value,
      error: Math.sqrt(value * (1 - value) / (largest.length + 1)),
      trials: largest.length,
    },
  };
}
