import type { Progress } from "../workers/mod.ts";
import { calibrate, type Calibration } from "./calibrate.ts";
import type { Comparison, WeighedHypothesis } from "./compare_hypotheses.ts";
import { type HypothesisFit, valuesOf } from "./fit_hypothesis.ts";
import { type Hypothesis, hypothesisName } from "./hypothesis.ts";
import type { NoiseBank } from "./noise_bank.ts";
import type { NullTable } from "./null_table.ts";
import { fitPairInSteps, trialJob } from "./pair_trials.ts";
import type { Problem } from "./problem.ts";
import { inTurns } from "./work_in_steps.ts";

/** False-alarm rate above which a part is not taken as found. */
export const NEEDED = 0.01;

/** Trials below which no rate so low can be shown. */
export const ENOUGH_TRIALS = Math.round(1 / NEEDED) - 1;

/** What the data say of one part: whether the set without it would do. */
export interface PartTest {
  /** The part. */
  readonly part: string;
  /** Whether it is needed: the false-alarm rate is at most 0.01. */
  readonly needed: boolean;
  /** Whether no trial gained as much, but they are too few to show such a rate: it may be needed. */
  readonly unsettled: boolean;
  /** The rate, from trials of the set without the part. */
  readonly calibration: Calibration;
}

/** Two hypotheses of which neither contains the other, weighed both ways. */
export interface Contest {
  /** The one that fits better. */
  readonly leader: Hypothesis;
  /** The other one. */
  readonly rival: Hypothesis;
  /** How often data of the rival favour the leader as much as the data do. */
  readonly rival_true: Calibration;
  /** How often data of the leader favour it as little as the data do. */
  readonly leader_true: Calibration;
  /** Whether the rival is ruled out and the leader is not. */
  readonly decided: boolean;
}

/** What the data say of the hypotheses. */
export interface Judgement {
  /** The hypothesis whose every part is needed or unsettled, whether or not it is adequate. */
  readonly best: WeighedHypothesis;
  /** Tests of parts, in the order in which they were made. */
  readonly part_tests: readonly PartTest[];
  /**
   * The contest with the nearest hypothesis of as many parts; null when there is none, or when
   * residual tests object to one of them.
   */
  readonly contest: Contest | null;
}

/** Options of {@linkcode judge}. */
export interface JudgeOptions {
  /** The problem. */
  readonly problem: Problem;
  /**
   * Gives where noise is drawn from, for trials of a fit: residuals of the fit with all parts where it
   * is adequate, and else those of the fit itself, so that what no model explains counts as noise.
   */
  readonly bankFor: (fit: HypothesisFit) => NoiseBank;
  /** Trials of each calibration at most. */
  readonly trials: number;
  /** Seed of all trials. */
  readonly seed: number;
  /** Kept tables. */
  readonly tables: readonly NullTable[];
  /** Threads. */
  readonly workers: number;
  /** Progress of the trials. */
  readonly progress?: Progress;
  /** Ends the work. */
  readonly signal?: AbortSignal;
}

/**
 * Decides between hypotheses by calibrated tests. From the best supported one, parts that the data
 * do not need are taken away, the least supported first, as far as the sets allow; where nothing is
 * to be taken away, the best supported addition is tried. What is left is weighed both ways
 * against its nearest rival with as many parts.
 *
 * @param comparison The fitted hypotheses, best supported first.
 * @param options Problem, noise and number of trials.
 * @returns What is left, and the tests.
 */
export async function judge(comparison: Comparison, options: JudgeOptions): Promise<Judgement> {
  const { hypotheses } = comparison;
  const fit = hypotheses.filter(({ adequate }) => adequate);
  const eligible = fit.length > 0 ? fit : hypotheses;
  const part_tests: PartTest[] = [];
  const test = async (simple: WeighedHypothesis, rich: WeighedHypothesis) => {
    const part = rich.parts.filter((name) => !simple.parts.includes(name)).join(" + ");
    const calibration = await weighPair(simple, rich.parts, { ...options, what: part });
    const { value, exceeding } = calibration;
    const needed = value <= NEEDED;
    const unsettled = !needed && exceeding === 0;
    part_tests.push({ part, needed, unsettled, calibration });
    return needed || unsettled;
  };

  let best = eligible[0]!;
  const richer = hypotheses.filter(({ parts }) => isOneMore(best.parts, parts));
  if (richer.length > 0 && !hypotheses.some(({ parts }) => isOneMore(parts, best.parts))) {
    if (await test(best, richer[0]!)) best = richer[0]!;
  } else {
    for (let settled = false; !settled;) {
      settled = true;
      const simpler = hypotheses.filter(({ parts }) => isOneMore(parts, best.parts));
      for (const simple of simpler) {
        // A set that does not explain the data is no way out, whatever a test of one part says.
        if (await test(simple, best) || (best.adequate && !simple.adequate)) continue;
        best = simple;
        settled = false;
        break;
      }
    }
  }
  const rival = hypotheses.find(({ parts }) => {
    const shared = parts.filter((part) => best.parts.includes(part)).length;
    return parts.length === best.parts.length && shared === parts.length - 1;
  });
  // What residual tests rule out needs no trials.
  const open = rival !== undefined && rival.adequate && best.adequate;
  const contest = open ? await holdContest(best, rival, options) : null;
  return { best, part_tests, contest };
}

function isOneMore(simple: Hypothesis, rich: Hypothesis): boolean {
  return rich.length === simple.length + 1 && simple.every((part) => rich.includes(part));
}

async function weighPair(
  from: WeighedHypothesis,
  against: Hypothesis,
  { problem, bankFor, seed, what, ...options }: JudgeOptions & { readonly what: string },
): Promise<Calibration> {
  const pair = { first: from.parts, second: against, warm: valuesOf(from.fit) };
  const { statistic } = await inTurns(fitPairInSteps(problem, pair), options.signal);
  const { progress } = options;
  return await calibrate(
    trialJob(problem, { fit: from.fit, second: against, bank: bankFor(from.fit), seed }),
    {
      ...options,
      observed: statistic,
      ...(progress === undefined ? {} : {
        progress: (done: number, total: number) =>
          progress(done, total, `trials of ${hypothesisName(from.parts)} (${what})`),
      }),
    },
  );
}

async function holdContest(
  best: WeighedHypothesis,
  rival: WeighedHypothesis,
  options: JudgeOptions,
): Promise<Contest> {
  const [leader, other] = best.chi_square <= rival.chi_square ? [best, rival] : [rival, best];
  const rival_true = await weighPair(other, leader.parts, {
    ...options,
    what: `against ${hypothesisName(leader.parts)}`,
  });
  // Trials of the leader: how far the rival falls behind in the data, against how far it does there.
  const leader_true = await weighPair(leader, other.parts, {
    ...options,
    what: `against ${hypothesisName(other.parts)}`,
  });
  return {
    leader: leader.parts,
    rival: other.parts,
    rival_true,
    leader_true,
    decided: rival_true.value <= NEEDED && leader_true.value > NEEDED,
  };
}
