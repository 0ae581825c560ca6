import { runTasks } from "../workers/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { InputError } from "../errors.ts";
import type { Hypothesis } from "./hypothesis.ts";
import { joinNullTables, nullKey, type NullTable } from "./null_table.ts";
import type { TrialJob } from "./pair_trials.ts";

/** A false-alarm rate that was measured. */
export interface Calibration {
  /** The hypothesis that trials were made of. */
  readonly null_parts: Hypothesis;
  /** The one it was weighed against. */
  readonly against_parts: Hypothesis;
  /** Gain of chi-square in the data. */
  readonly observed: number;
  /** (k + 1) / (N + 1), k of N trials having gained as much: an upper limit for k = 0. */
  readonly value: number;
  /** Binomial standard deviation of `value`. */
  readonly error: number;
  /** Number of trials, N. */
  readonly trials: number;
  /** Number of trials that gained as much, k. */
  readonly exceeding: number;
  /** Where a run of trials may end: after each of these, if the answer is clear. */
  readonly stopping_points: readonly number[];
  /** Gain of each trial, in their order. */
  readonly table: NullTable;
}

/** Options of {@linkcode calibrate}. */
export interface CalibrateOptions {
  /** Statistic of the data. */
  readonly observed: number;
  /**
   * Number of trials at most.
   *
   * @default {200}
   */
  readonly trials?: number;
  /**
   * Tables of the same pair, of which trials need not be run again.
   *
   * @default {[]}
   */
  readonly tables?: readonly NullTable[];
  /**
   * Threads.
   *
   * @default {1}
   */
  readonly workers?: number;
  /** Called as trials are done. */
  readonly progress?: Progress;
  /** Ends the work. */
  readonly signal?: AbortSignal;
}

/** Trials in a task: few enough to spread well, and for an interrupt to be heard between two tasks. */
const CHUNK = 4;
/** A stretch of trials, at whose end the run may stop. */
const STRETCH = 100;
/** That many exceeding trials make the answer clear: the hypothesis in question is not needed. */
const CLEAR = 10;

/**
 * Measures how often data of the null hypothesis gain as much by going to the other one. Trials
 * are simulated from the fitted null hypothesis with noise, flickering and discrepancies drawn from
 * the data's own residuals, and fitted as the data were. A run ends after 100, 200, … trials, early
 * only when ten have gained as much as the data (Besag & Clifford 1991, Biometrika 78, 301).
 *
 * @param job The pair.
 * @param options What was observed, and how many trials.
 * @returns The rate; its table can be kept and joined with others.
 * @throws {InputError} When there are no trials to be run.
 *
 * @example
 * ```ts
 * import {
 *   calibrate,
 *   fitHypothesis,
 *   fitPair,
 *   noiseBank,
 *   prepareProblem,
 *   simulateTrail,
 *   trialJob,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assert, assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { problem, richest, line_scale } = prepared;
 * const bank = noiseBank(problem, richest, { line_scale });
 * const fit = fitHypothesis(problem, { hypothesis: ["disc"] });
 * const job = trialJob(problem, { fit, second: ["disc", "spot"], bank, seed: 1 });
 * const observed = fitPair(problem, job).statistic;
 * const { value, trials } = await calibrate(job, { observed, trials: 5 });
 * assertEquals(trials, 5);
 * assert(value >= 1 / 6);
 * ```
 */
export async function calibrate(job: TrialJob, options: CalibrateOptions): Promise<Calibration> {
  const { observed, trials = 200, tables = [] } = options;
  if (!(Number.isInteger(trials) && trials >= 1)) {
    throw new InputError({
      action: "calibrate a false-alarm rate",
      rule: "the number of trials must be a whole number above 0",
      value: trials,
      key: "weigh.trials",
    });
  }
  const key = nullKey(job);
  const known = tables.filter((table) => table.key === key);
  const points: number[] = [];
  for (let n = STRETCH; n < trials; n += STRETCH) points.push(n);
  points.push(trials);

  let table: NullTable = { key, first: 0, statistics: new Float64Array(0) };
  let exceeding = 0;
  for (const point of points) {
    table = await extend(table, job, { ...options, known, point, trials });
    exceeding = table.statistics.filter((statistic) => statistic >= observed).length;
    if (exceeding >= CLEAR) break;
  }
  const n = table.statistics.length;
  const value = (exceeding + 1) / (n + 1);
  return {
    null_parts: job.first,
    against_parts: job.second,
    observed,
    value,
    error: Math.sqrt(value * (1 - value) / (n + 1)),
    trials: n,
    exceeding,
    stopping_points: points,
    table,
  };
}

/**
 * Runs a stretch of a pair's trials, to be joined with others: what one part of a split run does.
 *
 * @param job The pair.
 * @param options First trial and the one after the last, threads, progress.
 * @returns Their statistics.
 *
 * @example
 * ```ts
 * import {
 *   fitHypothesis,
 *   joinNullTables,
 *   noiseBank,
 *   prepareProblem,
 *   runNullTable,
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
 * const whole = await runNullTable(job, { from: 0, to: 4 });
 * const late = await runNullTable(job, { from: 2, to: 4 });
 * const early = await runNullTable(job, { from: 0, to: 2 });
 * assertEquals(joinNullTables([late, early]), whole);
 * ```
 */
export async function runNullTable(
  job: TrialJob,
  options: {
    readonly from: number;
    readonly to: number;
    readonly workers?: number;
    readonly progress?: Progress;
    readonly signal?: AbortSignal;
  },
): Promise<NullTable> {
  const { from, to, workers = 1, progress, signal } = options;
  const tasks: { from: number; to: number }[] = [];
  for (let k = from; k < to; k += CHUNK) tasks.push({ from: k, to: Math.min(to, k + CHUNK) });
  const parts = await runTasks<{ from: number; to: number }, Float64Array, TrialJob>(tasks, {
    module: new URL("./trial_worker.ts", import.meta.url),
    workers,
    shared: job,
    what: "trials",
    ...(progress === undefined ? {} : {
      progress: (done: number) => progress(Math.min(to, from + done * CHUNK), to, "trials"),
    }),
    ...(signal === undefined ? {} : { signal }),
  });
  const statistics = new Float64Array(to - from);
  parts.forEach((part, i) => statistics.set(part, i * CHUNK));
  return { key: nullKey(job), first: from, statistics };
}

async function extend(
  table: NullTable,
  job: TrialJob,
  { known, point, workers = 1, progress, signal, trials = point }: CalibrateOptions & {
    readonly known: readonly NullTable[];
    readonly point: number;
  },
): Promise<NullTable> {
  const from = table.statistics.length;
  const joined = joinNullTables([table, ...known]);
  const have = Math.min(point, joined.statistics.length);
  const start = { ...table, statistics: joined.statistics.slice(0, Math.max(from, have)) };
  if (have >= point) return start;
  const more = await runNullTable(job, {
    from: start.statistics.length,
    to: point,
    workers,
    ...(progress === undefined ? {} : {
      progress: (done: number) => progress(done, trials, "trials"),
    }),
    ...(signal === undefined ? {} : { signal }),
  });
  return joinNullTables([start, more]);
}
