import { quantile, randomStream } from "../numerics/mod.ts";
import { fitHypothesis, type HypothesisFit, valuesOf } from "./fit_hypothesis.ts";
import { fitErrors } from "./fit_errors.ts";
import { fittedValues } from "./fitted_values.ts";
import { lineOf } from "./line_of.ts";
import { addNoise, drawNoise } from "./draw_noise.ts";
import type { NoiseBank } from "./noise_bank.ts";
import { type Problem, withFlux } from "./problem.ts";

/** Errors from refits of resampled data. */
export interface BootstrapErrors {
  /** Lower and upper end of each number's central 68 % interval, by path. */
  readonly intervals: Readonly<Record<string, readonly [low: number, high: number]>>;
  /** Number of refits. */
  readonly replicas: number;
}

/**
 * Errors of a fit by block bootstrap: noise in contiguous blocks of exposures, drawn from the
 * residuals, is put on the fitted model and the hypothesis fitted again. Unlike the covariance, it
 * knows of noise that is correlated and of parameters on which the model depends in a curved way.
 *
 * @param problem The problem.
 * @param options The fit, where noise comes from, how many replicas, and the seed.
 * @returns Intervals.
 *
 * @example
 * ```ts
 * import {
 *   blockBootstrap,
 *   noiseBank,
 *   prepareProblem,
 *   simulateTrail,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertLess } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { problem, richest, line_scale } = prepared;
 * const bank = noiseBank(problem, richest, { line_scale });
 * const { intervals } = blockBootstrap(problem, { fit: richest, bank, replicas: 5 });
 * const [low, high] = intervals["disc.outer_radius_over_a"]!;
 * assertLess(low, high);
 * ```
 */
export function blockBootstrap(
  problem: Problem,
  { fit, bank, replicas = 200, seed = 1 }: {
    readonly fit: HypothesisFit;
    readonly bank: NoiseBank;
    readonly replicas?: number;
    readonly seed?: number;
  },
): BootstrapErrors {
  const { data } = problem;
  const line = lineOf(problem, fit);
  const found = new Map<string, number[]>();
  for (let k = 0; k < replicas; k++) {
    const noise = drawNoise(bank, { data, random: randomStream(seed, k) });
    const replica = withFlux(problem, addNoise(line, { data, noise }));
    const again = fitHypothesis(replica, {
      hypothesis: fit.hypothesis,
      base: fit,
      warm: valuesOf(fit),
    });
    const { fitted } = fittedValues(replica, again, fitErrors(replica, again));
    for (const [path, value] of Object.entries(fitted)) {
      found.set(path, [...(found.get(path) ?? []), value]);
    }
  }
  const intervals = [...found].map(([path, values]) =>
    [path, [quantile(values, 0.16), quantile(values, 0.84)] as const] as const
  );
  return { intervals: Object.fromEntries(intervals), replicas };
}
