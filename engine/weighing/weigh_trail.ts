import type { Warning } from "../errors.ts";
import type { Progress } from "../workers/mod.ts";
import { compareInSteps, type Comparison } from "./compare_hypotheses.ts";
import { type StrongestSource, strongestSource } from "./compact_source.ts";
import { type DetectionLimit, limitInSteps } from "./detection_limit.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import type { FitSetup } from "./fit_setup.ts";
import { ENOUGH_TRIALS, judge, type Judgement } from "./judge.ts";
import { noiseBank } from "./noise_bank.ts";
import type { NullTable } from "./null_table.ts";
import { type PreparedProblem, prepareInSteps, type PrepareOptions } from "./prepare_problem.ts";
import { type StructureProbabilities, structureProbabilities } from "./structure_probabilities.ts";
import { setsToWeigh } from "./sets_to_weigh.ts";
import { type Verdict, verdictOf } from "./verdict.ts";
import { inTurns } from "./work_in_steps.ts";
import { type WeighableTrail, weighingData, type WeighingDataOptions } from "./weighing_data.ts";

/** Options of {@linkcode weighTrail}. */
export interface WeighOptions
  extends FitSetup, WeighingDataOptions, Partial<Omit<PrepareOptions, "sets">> {
  /**
   * Sets of parts.
   *
   * @default {defaultSets}
   */
  readonly sets?: readonly (readonly string[])[];
  /**
   * Trials of each calibration at most.
   *
   * @default {200}
   */
  readonly trials?: number;
  /**
   * Seed of everything that is drawn.
   *
   * @default {1}
   */
  readonly seed?: number;
  /**
   * Threads.
   *
   * @default {1}
   */
  readonly workers?: number;
  /**
   * Tables of trials that were kept: those of the same configuration are not run again.
   *
   * @default {[]}
   */
  readonly tables?: readonly NullTable[];
  /**
   * Whether to compute what a compact source would need to be found.
   *
   * @default {true}
   */
  readonly limit?: boolean;
  /** Called as trials are done. */
  readonly progress?: Progress;
  /** Ends the work. */
  readonly signal?: AbortSignal;
}

/** A compact source that was looked for everywhere, and where it may belong. */
export interface SeatedSource extends StrongestSource {
  /** Standard deviation along Vx, geometry included, km/s. */
  readonly vx_error_kms: number;
  /** Standard deviation along Vy, geometry included, km/s. */
  readonly vy_error_kms: number;
  /** Probability of each structure as its seat. */
  readonly structures: StructureProbabilities;
}

/** A line, weighed. */
export interface WeighedLine {
  /** The trail it was. */
  readonly trail: WeighableTrail;
  /** Systemic velocity that was assumed, km/s. */
  readonly systemic_kms: number;
  /** Samples, whitening, and what was measured of nuisances. */
  readonly prepared: PreparedProblem;
  /** The hypotheses, best supported first. */
  readonly comparison: Comparison;
  /** Calibrated tests. */
  readonly judgement: Judgement;
  /** What a compact source would need to be found on top of the simplest set; null when not wanted. */
  readonly limit: DetectionLimit | null;
  /** The strongest compact source on top of the simplest set, significant or not; null without one. */
  readonly source: SeatedSource | null;
  /** The conclusion. */
  readonly verdict: Verdict;
  /** Tables of all trials that were run or used, to be kept. */
  readonly tables: readonly NullTable[];
  /** What to know. */
  readonly warnings: readonly Warning[];
}

/**
 * Weighs hypotheses about a line: fits every set of parts in data space, compares them, measures by
 * simulation how often the simpler of the leading ones would look like this, and says what follows.
 *
 * @param trail The trail.
 * @param options The binary, what is known of it, the sets, and how many trials.
 * @returns Everything that was found.
 * @throws {InputError} When a set is not one, or the trail holds too little.
 *
 * @example
 * ```ts
 * import { simulateTrail, weighTrail } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]];
 * const { verdict } = await weighTrail(trail, { binary, sets, trials: 10, limit: false });
 * assertEquals(verdict.preferred, ["disc"]);
 * ```
 */
export async function weighTrail(
  trail: WeighableTrail,
  options: WeighOptions,
): Promise<WeighedLine> {
  const { trials = 200, seed = 1, workers = 1, tables = [], progress, signal, errors = {} } =
    options;
  const data = weighingData(trail, options);
  const sets = setsToWeigh(options, data);
  const prepared = await inTurns(prepareInSteps(data, options, { ...options, sets }), signal);
  const { problem, richest, line_scale } = prepared;
  const comparison = await inTurns(compareInSteps(prepared, sets, { seed }), signal);
  const bank = noiseBank(problem, richest, { line_scale });
  const bankFor = (fit: HypothesisFit) =>
    bank.structured ? noiseBank(problem, fit, { line_scale }) : bank;
  const judgement = await judge(comparison, {
    problem,
    bankFor,
    trials,
    seed,
    tables,
    workers,
    ...(progress === undefined ? {} : { progress }),
    ...(signal === undefined ? {} : { signal }),
  });

  const simplest = comparison.hypotheses.reduce((a, b) => b.parts.length < a.parts.length ? b : a);
  const { fit, fit_errors } = simplest;
  const looked = { fit, fit_errors, bank: bankFor(fit), trials, seed };
  const search = options.limit === false
    ? null
    : await inTurns(limitInSteps(problem, looked), signal);
  const found = search === null ? null : strongestSource(problem, { fit, search });
  let source: SeatedSource | null = null;
  if (found !== null && search !== null) {
    // The geometry was free in the fit: its errors are in the covariance.
    const [xx, , yy] = found.covariance;
    source = {
      ...found,
      vx_error_kms: Math.sqrt(xx),
      vy_error_kms: Math.sqrt(yy),
      structures: structureProbabilities(found, {
        binary: options.binary,
        errors,
        half_width_kms: search.limit.half_width_kms,
        seed,
      }),
    };
  }
  const limit = search?.limit ?? null;
  const verdict = verdictOf(judgement, { limit });
  const calibrations = [
    ...judgement.part_tests.map(({ calibration }) => calibration),
    ...judgement.contest === null
      ? []
      : [judgement.contest.rival_true, judgement.contest.leader_true],
  ];
  return {
    trail,
    systemic_kms: options.systemic_kms ?? 0,
    prepared,
    comparison,
    judgement,
    limit,
    source,
    verdict,
    tables: calibrations.map(({ table }) => table),
    warnings: [
      ...warningsOf(prepared, {
        trials,
        white: bank.kind === "white",
        donor: options.sets !== undefined || options.binary.inclination_deg !== null,
      }),
      ...comparison.hypotheses.filter((hypothesis, k) => k === 0 || hypothesis === judgement.best)
        .flatMap(({ warnings }) => warnings),
    ],
  };
}

function warningsOf(
  { problem, line_scale, lone_samples }: PreparedProblem,
  { trials, white, donor }: {
    readonly trials: number;
    readonly white: boolean;
    readonly donor: boolean;
  },
): Warning[] {
  const warnings: Warning[] = [];
  const warn = (code: string, text: string) => warnings.push({ code, text });
  if (problem.data.sign < 0) {
    warn("absorption-turned", "the line is in absorption: its sign was turned");
  }
  if (lone_samples > 0) {
    warn(
      "samples-left-out",
      `${lone_samples} of ${
        problem.data.flux.length + lone_samples
      } samples stand alone, more than 6 standard deviations from their neighbours and sharper than the instrument's profile, and were left out: cosmic rays that were not found before?`,
    );
  }
  if (trials < ENOUGH_TRIALS) {
    warn(
      "too-few-trials",
      `${trials} trials cannot show a false-alarm rate of 1 %: ${ENOUGH_TRIALS} can`,
    );
  }
  if (!donor) {
    warn("donor-not-weighed", "sets with a donor need an inclination and were left out");
  }
  if (white) {
    warn(
      "noise-assumed-white",
      "there are fewer than 16 exposures of a set-up: trials have white noise instead of the data's own",
    );
  }
  if (line_scale.rms > 3 * line_scale.rms_error) {
    warn(
      "line-varies",
      `the line's brightness varies by ${(100 * line_scale.rms).toFixed(1)} ± ${
        (100 * line_scale.rms_error).toFixed(1)
      } % from exposure to exposure: that was given no weight`,
    );
  }
  return warnings;
}
