import { fitInSteps, type HypothesisFit, total } from "./fit_hypothesis.ts";
import { type FitSetup, fitSetup } from "./fit_setup.ts";
import { type Hypothesis, hypothesisOf } from "./hypothesis.ts";
import { lineOf } from "./line_of.ts";
import { type LineScale, measureLineScale } from "./line_scale.ts";
import { loneSamples, withoutSamples } from "./lone_samples.ts";
import { makeProblem, type Problem, withNuisances } from "./problem.ts";
import type { WeighingData } from "./weighing_data.ts";
import { makeWhitening, type SoftDirection } from "./whitening.ts";
import { atOnce, type Steps } from "./work_in_steps.ts";

/** Options of {@linkcode prepareProblem}. */
export interface PrepareOptions {
  /** The sets to be weighed; their union is what nuisances are measured against. */
  readonly sets: readonly Hypothesis[];
  /**
   * Degree of each exposure's baseline in velocity; −1 for none.
   *
   * @default {1}
   */
  readonly baseline_order?: number;
  /**
   * Relative variation of the line's brightness from exposure to exposure: flickering against the
   * continuum, or a grey scale where the data were not divided by it. A number is a prior's standard
   * deviation, 0 for none.
   *
   * @default {"measured"}
   */
  readonly line_scale?: number | "measured";
  /**
   * Standard deviation of the zero of velocity from exposure to exposure, km/s.
   *
   * @default {0}
   */
  readonly shift_kms?: number;
}

/** A problem whose nuisances were measured. */
export interface PreparedProblem {
  /** The problem, with its whitening. */
  readonly problem: Problem;
  /** The fit of all parts together. */
  readonly richest: HypothesisFit;
  /** What was found of the line's brightness. */
  readonly line_scale: LineScale;
  /** Standard deviation that the fits allow the line's brightness. */
  readonly line_scale_prior: number;
  /** Samples that stood alone far from all others and were left out. */
  readonly lone_samples: number;
}

/** Rounds of fit and nuisance; two are enough where flickering is below a quarter of the line. */
const ROUNDS = 4;
const SAME_RMS = 0.02;
/** Light over continuum that the deepest line is taken to leave. */
const DARKEST = 0.05;
/** A line that varies by more than this is another line at every exposure. */
const LARGEST_RMS = 0.5;

/**
 * Makes data ready to be weighed: fits all parts together, leaves out samples that no light of the
 * star can have made, lets levels and slopes of the continuum multiply the line as well, measures how the line's brightness
 * varies, and makes a whitening that gives such variations no weight, by alternation as long as the
 * likelihood grows.
 *
 * @param data The samples.
 * @param setup What is known.
 * @param options Sets and nuisances.
 * @returns The problem and what was measured.
 *
 * @example
 * ```ts
 * import { prepareProblem, simulateTrail, weighingData } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertLess } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * assertLess(prepared.line_scale.rms, 0.02);
 * ```
 */
export function prepareProblem(
  data: WeighingData,
  setup: FitSetup,
  options: PrepareOptions,
): PreparedProblem {
  return atOnce(prepareInSteps(data, setup, options));
}

/** The same, piece by piece. */
export function* prepareInSteps(
  all: WeighingData,
  setup: FitSetup,
  options: PrepareOptions,
): Steps<PreparedProblem> {
  const { sets, line_scale = "measured", shift_kms = 0 } = options;
  const baseline_order = options.baseline_order ?? 1;
  const hypothesis = hypothesisOf([...new Set(sets.flat())]);
  const own = fitSetup(setup);
  let problem = makeProblem(all, own, { baseline_order });
  let richest = yield* fitInSteps(problem, { hypothesis });
  const lone = loneSamples(richest.evaluation.residual, all);
  const data = lone.length === 0 ? all : withoutSamples(all, lone);
  if (data !== all) problem = makeProblem(data, own, { baseline_order });
  // What the line is multiplied by where the continuum is wrong; a per cent more or less does not count.
  const light = lineOf(problem, richest)
    .map((value) => Math.max(DARKEST, 1 + data.sign * value));
  const order = { baseline_order, light };
  problem = withNuisances(problem, order);
  richest = yield* fitInSteps(problem, { hypothesis, base: richest });
  const plain = makeWhitening(data, order);
  let line = lineOf(problem, richest);
  let measured = measureLineScale(line, { data, whitening: plain });
  const priorOf = ({ rms }: LineScale) =>
    line_scale === "measured" ? Math.min(LARGEST_RMS, rms) : line_scale;
  let prior = priorOf(measured);
  let applied = 0;
  for (let round = 0; round < ROUNDS && (prior > 0 || shift_kms > 0); round++) {
    const soft: SoftDirection[] = [{ pattern: line, sigma: prior }];
    if (shift_kms > 0) {
      const moved = { ...richest.state, systemic_kms: richest.state.systemic_kms + 1 };
      const there = lineOf(problem, richest, { state: moved });
      soft.push({ pattern: there.map((value, n) => value - line[n]!), sigma: shift_kms });
    }
    const next = withNuisances(problem, { ...order, soft });
    const fit = yield* fitInSteps(next, { hypothesis, base: richest });
    if (unlikelihood(next, fit) > unlikelihood(problem, richest)) break;
    const settled = Math.abs(prior - applied) <= SAME_RMS * prior;
    problem = next;
    richest = fit;
    applied = prior;
    if (settled) break;
    line = lineOf(problem, richest);
    measured = measureLineScale(line, { data, whitening: plain });
    prior = priorOf(measured);
  }
  return {
    problem,
    richest,
    line_scale: measured,
    line_scale_prior: applied,
    lone_samples: lone.length,
  };
}

/** −2 ln likelihood, but for a constant. */
function unlikelihood(problem: Problem, fit: HypothesisFit): number {
  return total(fit) + problem.whitening.log_determinant;
}
