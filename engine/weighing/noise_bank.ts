import type { HypothesisFit } from "./fit_hypothesis.ts";
import { lineOf } from "./line_of.ts";
import type { LineScale } from "./line_scale.ts";
import type { Problem } from "./problem.ts";
import { isAdequate, residualTests } from "./residual_tests.ts";
import { makeWhitening } from "./whitening.ts";

/**
 * What the noise of some data is drawn from: their own residuals over their errors, exposure by
 * exposure, with whatever correlation along velocity and phase they have, and how the line's
 * brightness varied. Plain data: it can be sent to a worker.
 */
export interface NoiseBank {
  /** Residual over error of each sample, N values, of unit variance where the errors are right. */
  readonly residual: Float64Array;
  /** Velocity of each sample in the accretor's frame, N values, km/s: structure of the line moves with it. */
  readonly velocity_kms: Float64Array;
  /**
   * Relative excess of each exposure's line, P values. Where residuals are resampled, as it was
   * measured, noise included: residuals have no share of it.
   */
  readonly excess: Float64Array;
  /** Exposures in a block. */
  readonly block: number;
  /**
   * Whether residuals hold structure that the model lacks. If not, drawn blocks are turned over at
   * random, so that noise has no mean; if so, they are not, and what is the same at all phases stays.
   */
  readonly structured: boolean;
  /** "resampled" where blocks are drawn from the residuals, "white" where there are too few of them. */
  readonly kind: "resampled" | "white";
}

/** Fewer exposures than this in a group say too little of its noise. */
const LEAST_EXPOSURES = 16;

/** Correlation of neighbouring exposures above which blocks are made longer. */
const CORRELATED = 0.1;

/**
 * Makes the bank from a fit with all parts, so that a part which is there does not count as noise.
 *
 * @param problem The problem.
 * @param fit Its fit with all parts.
 * @param options What was measured of the line's brightness; and the kind, which is else chosen by
 * the number of exposures.
 * @returns The bank.
 *
 * @example
 * ```ts
 * import {
 *   noiseBank,
 *   prepareProblem,
 *   simulateTrail,
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
 * assertEquals([bank.kind, bank.structured], ["resampled", false]);
 * ```
 */
export function noiseBank(
  problem: Problem,
  fit: HypothesisFit,
  options: { readonly line_scale: LineScale; readonly kind?: "resampled" | "white" },
): NoiseBank {
  const { data } = problem;
  const { line_scale } = options;
  const { count, start, phase, velocity_kms } = data.sampling;
  const line = lineOf(problem, fit);
  const { baseline_order = 1, light } = problem.options;
  const order = { baseline_order, ...(light === undefined ? {} : { light }) };
  // Amplitudes of the line without a prior: what is left has no trace of its brightness.
  const hard = makeWhitening(data, { ...order, soft: [{ pattern: line, sigma: 1e6 }] });
  const residual = hard.apply(data.flux.map((value, n) => value - line[n]!));
  const spent = fit.parameters.length + fit.evaluation.active.length;
  const inflate = Math.sqrt(residual.length / Math.max(1, residual.length - spent));
  const { binary, systemic_kms, phase: shift } = fit.state;
  const moved = new Float64Array(residual.length);
  for (let i = 0; i < count; i++) {
    const from = start[i]!, to = start[i + 1]!;
    const accretor = systemic_kms -
      binary.k_accretor_kms * Math.sin(2 * Math.PI * (phase[i]! + shift));
    for (let n = from; n < to; n++) {
      // What baselines took away they would take from trials, too: that is not made up for.
      residual[n]! *= inflate;
      moved[n] = velocity_kms[n]! - accretor;
    }
  }
  const { rms, excess, excess_error } = line_scale;
  const groups = new Map<number, number>();
  for (const group of data.group) groups.set(group, (groups.get(group) ?? 0) + 1);
  const enough = Math.min(...groups.values()) >= LEAST_EXPOSURES;
  const kind = options.kind ?? (enough ? "resampled" : "white");
  return {
    residual,
    velocity_kms: moved,
    excess: excess.map((value, i) => {
      if (kind === "resampled") return inflate * value;
      // White noise brings its own share.
      const total = rms * rms + excess_error[i]! ** 2;
      return rms === 0 ? 0 : value * rms / Math.sqrt(total);
    }),
    block: blockLength(excess, { count, rms }),
    structured: !isAdequate(residualTests(problem, fit)),
    kind,
  };
}

/** Long enough to hold the memory of flickering, short enough that there are several. */
function blockLength(
  excess: Float64Array,
  { count, rms }: { readonly count: number; readonly rms: number },
): number {
  const least = Math.ceil(Math.cbrt(count));
  if (rms === 0) return least;
  const square = excess.reduce((sum, value) => sum + value * value, 0);
  let lag = 1;
  for (; lag < count / 4; lag++) {
    let sum = 0;
    for (let i = lag; i < count; i++) sum += excess[i]! * excess[i - lag]!;
    if (sum / square < CORRELATED) break;
  }
  return Math.max(least, Math.min(2 * lag, Math.floor(count / 4)));
}
