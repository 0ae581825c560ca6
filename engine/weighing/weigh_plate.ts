import { lineOf } from "./line_of.ts";
import type { Hypothesis } from "./hypothesis.ts";
import type { WeighedLine } from "./weigh_trail.ts";
import type { Sampling } from "../trail/mod.ts";

/** What a plate of a weighed line shows; all trails are laid out as `sampling`. */
export interface WeighPlate {
  /** Unmasked samples of the exposures. */
  readonly sampling: Sampling;
  /** Normalised flux minus one; turned over for a line in absorption. */
  readonly flux: Float64Array;
  /** The model whose every part is needed, without baselines. */
  readonly model: Float64Array;
  /** Its parts. */
  readonly parts: Hypothesis;
  /** Residual of each hypothesis over its error, each exposure's baseline taken away; best supported first. */
  readonly residuals: readonly {
    /** The parts. */
    readonly parts: Hypothesis;
    /** Residual over error. */
    readonly residual: Float64Array;
  }[];
  /** Gains of chi-square in trials of the null hypothesis; null when none were run. */
  readonly null_distribution: {
    /** The null hypothesis. */
    readonly null_parts: Hypothesis;
    /** The one it was weighed against. */
    readonly against_parts: Hypothesis;
    /** Gain of each trial. */
    readonly gains: Float64Array;
    /** Gain in the data. */
    readonly observed: number;
  } | null;
}

/**
 * The trails and the distribution that a plate of a weighed line shows.
 *
 * @param weighed The weighed line.
 * @returns What to draw.
 *
 * @example
 * ```ts
 * import { simulateTrail, weighPlate, weighTrail } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const weighed = await weighTrail(trail, { binary, sets: [["disc"]], limit: false });
 * assertEquals(weighPlate(weighed).model.length, trail.flux.length);
 * ```
 */
export function weighPlate(weighed: WeighedLine): WeighPlate {
  const { comparison, judgement, prepared, verdict } = weighed;
  const { problem } = prepared;
  const { data, whitening } = problem;
  const { false_alarm } = verdict;
  return {
    sampling: data.sampling,
    flux: data.flux,
    model: lineOf(problem, judgement.best.fit),
    parts: judgement.best.parts,
    residuals: comparison.hypotheses.map(({ parts, fit }) => {
      const line = lineOf(problem, fit);
      const raw = data.flux.map((value, n) => (value - line[n]!) / data.error[n]!);
      const baseline = whitening.baseline(raw);
      return { parts, residual: raw.map((value, n) => value - baseline[n]!) };
    }),
    null_distribution: false_alarm === null ? null : {
      null_parts: false_alarm.null_parts,
      against_parts: false_alarm.against_parts,
      gains: false_alarm.table.statistics,
      observed: false_alarm.observed,
    },
  };
}
