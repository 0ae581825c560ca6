import { randomStream } from "../numerics/mod.ts";
import { fitInSteps, type HypothesisFit, total, valuesOf } from "./fit_hypothesis.ts";
import { type Hypothesis, hypothesisName } from "./hypothesis.ts";
import { lineOf } from "./line_of.ts";
import { addNoise, drawNoise } from "./draw_noise.ts";
import type { NoiseBank } from "./noise_bank.ts";
import type { FitSetup } from "./fit_setup.ts";
import {
  makeProblem,
  type Problem,
  type ProblemOptions,
  withFlux,
  withGeometryHeld,
} from "./problem.ts";
import type { WeighingData } from "./weighing_data.ts";
import { atOnce, type Steps } from "./work_in_steps.ts";

/** Two hypotheses fitted to the same data. */
export interface PairFit {
  /** Chi-square of the first less that of the second, priors included. */
  readonly statistic: number;
  /** Fit of the first. */
  readonly first: HypothesisFit;
  /** Fit of the second. */
  readonly second: HypothesisFit;
}

/**
 * Fits two hypotheses in the one way that data and trials share, so that their statistics compare: both
 * go on from a fit of what they have in common, the geometry held.
 *
 * @param problem The problem.
 * @param options The two, and where fits start.
 * @returns Both fits and their statistic.
 *
 * @example
 * ```ts
 * import {
 *   fitPair,
 *   prepareProblem,
 *   simulateTrail,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assert } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { statistic } = fitPair(prepared.problem, {
 *   first: ["disc"],
 *   second: ["disc", "spot"],
 *   warm: new Map(),
 * });
 * assert(statistic >= 0);
 * ```
 */
export function fitPair(
  problem: Problem,
  { first, second, warm }: {
    readonly first: Hypothesis;
    readonly second: Hypothesis;
    readonly warm: ReadonlyMap<string, number>;
  },
): PairFit {
  return atOnce(fitPairInSteps(problem, { first, second, warm }));
}

/** The same, piece by piece. */
export function* fitPairInSteps(
  problem: Problem,
  { first, second, warm }: Pick<TrialJob, "first" | "second" | "warm">,
): Steps<PairFit> {
  const shared = first.filter((part) => second.includes(part));
  const base = shared.length === 0
    ? undefined
    : yield* fitInSteps(withGeometryHeld(problem), { hypothesis: shared, warm });
  const free = Object.values(problem.setup.errors ?? {}).some((error) => error > 0);
  const go = function* (hypothesis: Hypothesis): Steps<HypothesisFit> {
    return base !== undefined && !free && hypothesis.length === shared.length
      ? base
      : yield* fitInSteps(problem, { hypothesis, ...(base ? { base } : { warm }) });
  };
  const fits = { first: yield* go(first), second: yield* go(second) };
  return { ...fits, statistic: total(fits.first) - total(fits.second) };
}

/** All that trials of a pair need; plain data, so that it can be sent to a worker. */
export interface TrialJob {
  /** The samples. */
  readonly data: WeighingData;
  /** What is known. */
  readonly setup: FitSetup;
  /** Baseline and nuisances. */
  readonly options: ProblemOptions;
  /** Where noise is drawn from. */
  readonly bank: NoiseBank;
  /** The line under the null hypothesis, N samples. */
  readonly line: Float64Array;
  /** The null hypothesis, which trials are made of. */
  readonly first: Hypothesis;
  /** The one it is weighed against. */
  readonly second: Hypothesis;
  /** Where fits start. */
  readonly warm: ReadonlyMap<string, number>;
  /** Seed; trial k draws from its stream k. */
  readonly seed: number;
}

/** Everything about a pair's trials, from a fit of the null hypothesis. *
 * @example
 * ```ts
 * import {
 *   fitHypothesis,
 *   noiseBank,
 *   prepareProblem,
 *   simulateTrail,
 *   trialJob,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { problem, richest, line_scale } = prepared;
 * const bank = noiseBank(problem, richest, { line_scale });
 * const fit = fitHypothesis(problem, { hypothesis: ["disc"] });
 * const job = trialJob(problem, { fit, second: ["disc", "spot"], bank, seed: 1 });
 * assertEquals([job.first, job.second], [["disc"], ["disc", "spot"]]);
 * ```
 */
export function trialJob(
  problem: Problem,
  { fit, second, bank, seed }: {
    readonly fit: HypothesisFit;
    readonly second: Hypothesis;
    readonly bank: NoiseBank;
    readonly seed: number;
  },
): TrialJob {
  return {
    data: problem.data,
    setup: problem.setup,
    options: problem.options,
    bank,
    line: lineOf(problem, fit),
    first: fit.hypothesis,
    second,
    warm: valuesOf(fit),
    seed: pairSeed(seed, `${hypothesisName(fit.hypothesis)} / ${hypothesisName(second)}`),
  };
}

/** A seed of its own for each pair: 52 bits of FNV-1a (Fowler, Noll & Vo) of the name, and the seed. */
function pairSeed(seed: number, name: string): number {
  let hash = 0xcbf29ce484222325n;
  for (const character of `${seed} ${name}`) {
    hash = BigInt.asUintN(64, (hash ^ BigInt(character.codePointAt(0)!)) * 0x100000001b3n);
  }
  return Number(hash >> 12n);
}

/**
 * Data of one trial: the null hypothesis's line, flickering and noise drawn from the bank.
 *
 * @param job The pair.
 * @param k Number of the trial, from 0.
 * @returns N samples.
 */
export function trialFlux(job: TrialJob, k: number): Float64Array {
  const { data, bank, line, seed } = job;
  return addNoise(line, { data, noise: drawNoise(bank, { data, random: randomStream(seed, k) }) });
}

/** Templates of a scan are made once for a pair, however its trials are cut into tasks. */
const problems = new WeakMap<TrialJob, Problem>();

/**
 * Statistics of some trials of a pair. Trial k is the same whichever run it is in.
 *
 * @param job The pair.
 * @param options First trial, and the one after the last.
 * @returns Statistic of each.
 */
export function runTrials(
  job: TrialJob,
  { from, to }: { readonly from: number; readonly to: number },
): Float64Array {
  const problem = problems.get(job) ?? makeProblem(job.data, job.setup, job.options);
  problems.set(job, problem);
  const statistics = new Float64Array(to - from);
  for (let k = from; k < to; k++) {
    statistics[k - from] = fitPair(withFlux(problem, trialFlux(job, k)), job).statistic;
  }
  return statistics;
}
