import type { Calibration } from "./calibrate.ts";
import type { WeighedHypothesis } from "./compare_hypotheses.ts";
import type { DetectionLimit } from "./detection_limit.ts";
import type { ResidualTests } from "./residual_tests.ts";
import type { StructureProbabilities } from "./structure_probabilities.ts";
import type { WeighedLine } from "./weigh_trail.ts";

/** A false-alarm rate, as `weigh.json` has it. */
export interface FalseAlarmRecord {
  /** (k + 1) / (N + 1): an upper limit for k = 0. */
  readonly value: number;
  /** Binomial standard deviation. */
  readonly error: number;
  /** Number of trials, N. */
  readonly trials: number;
  /** Number of trials that gained as much, k. */
  readonly exceeding: number;
  /** Numbers of trials after which the run might have ended. */
  readonly stopping_points: readonly number[];
  /** Gain of chi-square in the data. */
  readonly gain: number;
  /** The hypothesis that trials were made of. */
  readonly null_parts: readonly string[];
  /** The one it was weighed against. */
  readonly against_parts: readonly string[];
}

/** One hypothesis, as `weigh.json` has it. */
export interface HypothesisRecord {
  /** Its parts. */
  readonly parts: readonly string[];
  /** Chi-square, nuisances marginalised, priors of the geometry included. */
  readonly chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** Numbers that were free, baselines included. */
  readonly free_parameters: number;
  /** The same, each by the share that the data determine. */
  readonly effective_parameters: number;
  /** Akaike's criterion for small samples; null where there are too few. */
  readonly aicc: number | null;
  /** Schwarz's criterion. */
  readonly bic: number;
  /** Whether no residual test objects. */
  readonly adequate: boolean;
  /** Root mean square of what the model misses over that of the line. */
  readonly misfit_fraction: number;
  /** Tests of its residuals. */
  readonly residual_tests: ResidualTests;
  /** Values by section and key of the model. */
  readonly fitted: Readonly<Record<string, number | null>>;
  /** One standard deviation each; null where a number is held or a part dark. */
  readonly errors: Readonly<Record<string, number | null>>;
}

/** One line of `weigh.json`: plain JSON, without NaN. */
export interface WeighRecord {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Convention of velocities. */
  readonly velocity: string;
  /** Systemic velocity that was assumed, km/s. */
  readonly systemic_kms: number;
  /** Whether the line's sign was turned. */
  readonly absorption: boolean;
  /** Number of exposures that were used. */
  readonly exposures: number;
  /** Scatter of the residuals of the best fit over the stated errors. */
  readonly noise_scale: number;
  /** Its standard deviation. */
  readonly noise_scale_error: number;
  /** Relative variation of the line's brightness from exposure to exposure. */
  readonly line_scale_rms: number;
  /** Its standard deviation. */
  readonly line_scale_rms_error: number;
  /** The hypotheses, best supported first. */
  readonly hypotheses: readonly HypothesisRecord[];
  /** Parts that the data ask for; empty when no set explains them. */
  readonly preferred: readonly string[];
  /** A set that the data do not tell from the preferred one, or too few trials do not rule out. */
  readonly undecided_with: readonly string[] | null;
  /** The conclusion in words. */
  readonly verdict: string;
  /** False-alarm rate of the two leading nested sets; null when none was measured. */
  readonly false_alarm: FalseAlarmRecord | null;
  /** Tests of single parts. */
  readonly part_tests: readonly (FalseAlarmRecord & {
    /** The part. */
    readonly part: string;
    /** Whether the data need it: the rate is 0.01 or less. */
    readonly needed: boolean;
    /** Whether no trial gained as much, but they are too few to show such a rate. */
    readonly unsettled: boolean;
  })[];
  /** The contest with the nearest rival, both ways; null without one. */
  readonly contest: {
    /** The one that fits better. */
    readonly leader: readonly string[];
    /** The other. */
    readonly rival: readonly string[];
    /** Whether the rival is ruled out and the leader is not. */
    readonly decided: boolean;
    /** How often data of the rival look like this. */
    readonly rival_true: FalseAlarmRecord;
    /** How often data of the leader look like this. */
    readonly leader_true: FalseAlarmRecord;
  } | null;
  /** What a compact source would need to be found; null when not computed. */
  readonly detection_limit: DetectionLimit | null;
  /** The strongest compact source on top of the simplest set, significant or not. */
  readonly strongest_source: {
    /** Place, km/s. */
    readonly vx_kms: number;
    /** Place, km/s. */
    readonly vy_kms: number;
    /** Standard deviation, geometry included, km/s. */
    readonly vx_error_kms: number;
    /** Standard deviation, geometry included, km/s. */
    readonly vy_error_kms: number;
    /** Standard deviation of its own velocities, km/s. */
    readonly sigma_kms: number;
    /** Share of the line's light. */
    readonly flux_fraction: number;
    /** Signal to noise; see the false-alarm rate for what it is worth. */
    readonly signal: number;
    /** How often noise alone gives as much anywhere. */
    readonly false_alarm: {
      /** (k + 1) / (N + 1). */
      readonly value: number;
      /** Binomial standard deviation. */
      readonly error: number;
      /** Number of trials, N. */
      readonly trials: number;
    };
    /** Probability of each structure as its seat, were it real. */
    readonly structures: StructureProbabilities;
  } | null;
}

/**
 * What `weigh.json` says of one line.
 *
 * @param weighed The weighed line.
 * @returns Plain data.
 *
 * @example
 * ```ts
 * import { simulateTrail, weighRecord, weighTrail } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 40 });
 * const weighed = await weighTrail(trail, { binary, sets: [["disc"]], limit: false });
 * const record = weighRecord(weighed);
 * assertEquals(record.preferred, ["disc"]);
 * assertEquals(JSON.parse(JSON.stringify(record)), record);
 * ```
 */
export function weighRecord(weighed: WeighedLine): WeighRecord {
  const { trail, comparison, judgement, prepared, limit, source, verdict } = weighed;
  const { data } = prepared.problem;
  const { contest } = judgement;
  return {
    line: trail.line.name,
    rest_air_angstrom: trail.line.air_angstrom,
    velocity: "V = c (λ/λ0 − 1)",
    systemic_kms: weighed.systemic_kms,
    absorption: data.sign < 0,
    exposures: data.sampling.count,
    noise_scale: comparison.noise_scale,
    noise_scale_error: comparison.noise_scale_error,
    line_scale_rms: prepared.line_scale.rms,
    line_scale_rms_error: prepared.line_scale.rms_error,
    hypotheses: comparison.hypotheses.map(hypothesisRecord),
    preferred: verdict.preferred,
    undecided_with: verdict.undecided_with,
    verdict: verdict.sentence,
    false_alarm: verdict.false_alarm === null ? null : falseAlarmRecord(verdict.false_alarm),
    part_tests: judgement.part_tests.map(({ part, needed, unsettled, calibration }) => ({
      part,
      needed,
      unsettled,
      ...falseAlarmRecord(calibration),
    })),
    contest: contest === null ? null : {
      leader: contest.leader,
      rival: contest.rival,
      decided: contest.decided,
      rival_true: falseAlarmRecord(contest.rival_true),
      leader_true: falseAlarmRecord(contest.leader_true),
    },
    detection_limit: limit,
    strongest_source: source === null ? null : {
      vx_kms: source.vx_kms,
      vy_kms: source.vy_kms,
      vx_error_kms: source.vx_error_kms,
      vy_error_kms: source.vy_error_kms,
      sigma_kms: source.sigma_kms,
      flux_fraction: source.flux_fraction,
      signal: source.signal,
      false_alarm: source.false_alarm,
      structures: source.structures,
    },
  };
}

function falseAlarmRecord(calibration: Calibration): FalseAlarmRecord {
  const { value, error, trials, exceeding, stopping_points, observed } = calibration;
  const { null_parts, against_parts } = calibration;
  return {
    value,
    error,
    trials,
    exceeding,
    stopping_points,
    gain: observed,
    null_parts,
    against_parts,
  };
}

function hypothesisRecord(hypothesis: WeighedHypothesis): HypothesisRecord {
  const { aicc, fitted, errors } = hypothesis;
  return {
    parts: hypothesis.parts,
    chi_square: hypothesis.chi_square,
    sample_count: hypothesis.sample_count,
    free_parameters: hypothesis.free_parameters,
    effective_parameters: hypothesis.effective_parameters,
    aicc: sound(aicc),
    bic: hypothesis.bic,
    adequate: hypothesis.adequate,
    misfit_fraction: hypothesis.misfit_fraction,
    residual_tests: hypothesis.residual_tests,
    fitted: soundAll(fitted),
    errors: soundAll(errors),
  };
}

function sound(value: number | null): number | null {
  return value !== null && Number.isFinite(value) ? value : null;
}

function soundAll(
  values: Readonly<Record<string, number | null>>,
): Readonly<Record<string, number | null>> {
  return Object.fromEntries(Object.entries(values).map(([key, value]) => [key, sound(value)]));
}
