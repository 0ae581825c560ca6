import type { Calibration } from "./calibrate.ts";
import type { WeighedHypothesis } from "./compare_hypotheses.ts";
import type { DetectionLimit } from "./detection_limit.ts";
import type { Hypothesis } from "./hypothesis.ts";
import { ENOUGH_TRIALS, type Judgement, NEEDED, type PartTest } from "./judge.ts";
import { ADEQUATE, type ResidualTests } from "./residual_tests.ts";

/** A judgement in words, and what may be kept of it. */
export interface Verdict {
  /** The parts that the data ask for; empty when no set explains them. */
  readonly preferred: Hypothesis;
  /**
   * Another set that the data do not tell from the preferred one, or the simpler one that too few
   * trials cannot rule out; null when there is none.
   */
  readonly undecided_with: Hypothesis | null;
  /** The calibration behind the sentence: of the two leading nested sets. Null when none was made. */
  readonly false_alarm: Calibration | null;
  /** What can be said, in a sentence or two, and no more than the numbers say. */
  readonly sentence: string;
}

const TESTS: Readonly<Record<keyof ResidualTests, string>> = {
  chi_square: "chi-square",
  profile: "the mean profile",
  phase: "the change with phase",
  velocity_correlation: "neighbouring pixels",
  phase_correlation: "neighbouring exposures",
};

/**
 * Puts a judgement into words.
 *
 * @param judgement The judgement.
 * @param options The limit on compact sources, where it was computed.
 * @default limit None
 * @returns The verdict.
 */
export function verdictOf(
  judgement: Judgement,
  { limit = null }: { readonly limit?: DetectionLimit | null } = {},
): Verdict {
  const { best, part_tests, contest } = judgement;
  const name = inWords(best.parts);
  const about = part_tests.filter(({ calibration }) => same(calibration.against_parts, best.parts));
  const needed = about.filter((test) => test.needed);
  const unsettled = about.filter((test) => test.unsettled);
  const kept = [...needed, ...unsettled];
  const beyond = part_tests.filter(({ calibration, needed }) =>
    !needed && same(calibration.null_parts, best.parts)
  );
  const leading = kept.length > 0
    ? kept.reduce((a, b) => b.calibration.value > a.calibration.value ? b : a)
    : beyond.reduce<PartTest | null>(
      (a, b) => a === null || b.calibration.value < a.calibration.value ? b : a,
      null,
    );
  const false_alarm = leading?.calibration ?? contest?.rival_true ?? null;

  if (!best.adequate) {
    return {
      preferred: [],
      undecided_with: null,
      false_alarm,
      sentence: `None of the sets explains the data (${objections(best)}): the line lies outside ` +
        `these hypotheses, for which magnetic accretion and winds are among the possible reasons. ` +
        `Of the sets, ${name} misses least (${percent(best.misfit_fraction)} % of the line, root ` +
        `mean square)${
          part_tests.length === 0 ? "" : `; its tests (${list(part_tests)}) hold for ` +
            `discrepancies like those seen, and are no proof of its parts`
        }.`,
    };
  }
  if (contest !== null && !contest.decided) {
    const either = [contest.leader, contest.rival];
    const lost = contest.rival_true.value <= NEEDED;
    const sentence = lost
      ? `Neither ${inWords(either[0]!)} nor ${inWords(either[1]!)} gives data like these: the ` +
        `first by ${rate(contest.leader_true)}, the second by ${rate(contest.rival_true)}.`
      : `The data do not tell ${inWords(either[0]!)} from ${inWords(either[1]!)}: the second ` +
        `gives as good a case for the first in ${rate(contest.rival_true)}.`;
    const other = same(best.parts, contest.leader) ? contest.rival : contest.leader;
    return {
      preferred: lost ? [] : best.parts,
      undecided_with: lost ? null : other,
      false_alarm,
      sentence: kept.length > 0 ? `${sentence} Against simpler sets: ${list(kept)}.` : sentence,
    };
  }
  const base = { preferred: best.parts, undecided_with: null, false_alarm };
  const doubtful = about.filter((test) => !kept.includes(test));
  const doubt = doubtful.length === 0
    ? ""
    : ` Not established by itself: the ${doubtful.map(({ part }) => part).join(", the ")} (${
      list(doubtful)
    }).`;
  if (unsettled.length > 0) {
    const parts = unsettled.map(({ part }) => part).join(", the ");
    return {
      ...base,
      undecided_with: unsettled[0]!.calibration.null_parts,
      sentence: `The data favour ${name} and fit it, but the trials are too few to call the ` +
        `${parts} needed: ${list(kept)}; ${ENOUGH_TRIALS} trials could show it.${doubt}`,
    };
  }
  if (needed.length > 0) {
    const versus = contest === null
      ? ""
      : ` ${capital(inWords(contest.rival))} would look like this in ${rate(contest.rival_true)}.`;
    return {
      ...base,
      sentence: `The data ask for ${name} and fit it: ${list(needed)}.${doubt}${versus}`,
    };
  }
  const tried = beyond.length === 0 ? "" : `: ${list(beyond)}`;
  return { ...base, sentence: `The data ask for nothing beyond ${name}${tried}.${unseen(limit)}` };
}

function unseen(limit: DetectionLimit | null): string {
  const seen = limit?.fraction_95.filter((value) => value !== null) ?? [];
  if (limit === null || seen.length === 0) return "";
  return ` A compact source of ${
    percent(Math.max(...seen))
  } % of the light or more, anywhere within ${
    Math.round(limit.half_width_kms)
  } km/s, would have been found in 95 % of all cases.`;
}

function objections({ residual_tests }: WeighedHypothesis): string {
  const failed = Object.entries(residual_tests)
    .filter(([, { probability }]) => probability < ADEQUATE)
    .map(([test]) => TESTS[test as keyof ResidualTests]);
  return `${failed.join(", ")} object${failed.length === 1 ? "s" : ""} at p < ${ADEQUATE}`;
}

/** As in "the spot has a false-alarm rate below 1.0 % (0 of 200 trials)". */
function list(tests: readonly PartTest[]): string {
  return tests.map(({ part, calibration }) =>
    `noise without the ${part} gains as much in ${rate(calibration)}`
  ).join("; ");
}

/** A rate with what it was counted from; no finer than the number of trials allows. */
function rate({ value, error, exceeding, trials }: Calibration): string {
  return exceeding === 0
    ? `at most ${percent(value)} % of cases (none of ${trials} trials)`
    : `${percent(value)} ± ${percent(error)} % of cases (${exceeding} of ${trials} trials)`;
}

function percent(fraction: number): string {
  return String(Number((100 * fraction).toPrecision(2)));
}

function inWords(parts: Hypothesis): string {
  const named = parts.map((part) => `${/^[aeiou]/.test(part) ? "an" : "a"} ${part}`);
  const last = named.pop()!;
  return named.length === 0 ? last : `${named.join(", ")} and ${last}`;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function same(a: Hypothesis, b: Hypothesis): boolean {
  return a.length === b.length && a.every((part) => b.includes(part));
}
