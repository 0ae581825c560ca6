import { median, normalQuantile } from "../numerics/mod.ts";
import { dot } from "./brightnesses.ts";
import {
  refitDirections,
  type SearchCell,
  searchCells,
  type SearchGrid,
  searchNoise,
  tangentOf,
} from "./compact_search.ts";
import type { FitErrors } from "./fit_errors.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import type { NoiseBank } from "./noise_bank.ts";
import type { Problem } from "./problem.ts";
import { atOnce, type Steps } from "./work_in_steps.ts";

/** What a compact source would need in order to be found, place by place. */
export interface DetectionLimit extends SearchGrid {
  /** Standard deviation of the source's own velocities, km/s. */
  readonly sigma_kms: number;
  /** Rate at which data without a source pass the threshold somewhere in the square. */
  readonly false_alarm: number;
  /** The threshold, as a signal to noise. */
  readonly threshold: number;
  /** Its standard deviation, from the number of trials. */
  readonly threshold_error: number;
  /** Number of trials. */
  readonly trials: number;
  /**
   * Share of the line's light that is found in half of all cases, `cells`² values, rows of
   * increasing Vy; null where no share would be.
   */
  readonly fraction_50: readonly (number | null)[];
  /** The same for 95 %. */
  readonly fraction_95: readonly (number | null)[];
  /** Standard deviation of `fraction_95`, from the number of trials. */
  readonly fraction_95_error: readonly (number | null)[];
}

/** Options of {@linkcode detectionLimit}. */
export interface DetectionLimitOptions {
  /** The fit of the hypothesis without the source. */
  readonly fit: HypothesisFit;
  /** Its errors, which hold what it can absorb. */
  readonly fit_errors: FitErrors;
  /** Where noise is drawn from. */
  readonly bank: NoiseBank;
  /**
   * Places.
   *
   * @default 21 by 21, as far as 2.5 (K1 + K2) or 0.8 times the reach of the data
   */
  readonly grid?: SearchGrid;
  /**
   * Standard deviation of the source's velocities, km/s.
   *
   * @default {60}
   */
  readonly sigma_kms?: number;
  /**
   * False-alarm rate of the search.
   *
   * @default {0.01}
   */
  readonly false_alarm?: number;
  /**
   * Gain of chi-square that counts as found, such as one that a calibration gave.
   *
   * @default What `false_alarm` of a blind search of the square asks for
   */
  readonly threshold?: number;
  /**
   * Whether place and width are fitted when the source is looked for, as a calibrated test of a spot
   * does: what that gains helps to pass the threshold.
   *
   * @default {false}
   */
  readonly refit?: boolean;
  /**
   * Trials of noise.
   *
   * @default {200}
   */
  readonly trials?: number;
  /**
   * Seed of the trials.
   *
   * @default {1}
   */
  readonly seed?: number;
}

/** A detection limit, and what it was computed from. */
export interface DetectionSearch {
  /** The limit. */
  readonly limit: DetectionLimit;
  /** Matched filters of the places. */
  readonly cells: readonly SearchCell[];
  /** Largest signal to noise anywhere in the square, by trial. */
  readonly largest: Float64Array;
}

/** Signal to noise below which a unit of light is taken as not seen at all. */
const BLIND = 1e-9;

/**
 * Finds by injection and recovery which share of the line's light a compact source would need, at
 * each place of the map, to be found in 50 and in 95 % of all cases. Noise is drawn as for
 * calibrations. A source of given light adds its strength to the matched filter's noise, so that one
 * set of trials serves all lights; whatever the fitted model can absorb to first order is lost.
 *
 * @param problem The problem.
 * @param options The fit without the source, noise, places and threshold.
 * @returns The limit.
 *
 * @example
 * ```ts
 * import {
 *   compareHypotheses,
 *   detectionLimit,
 *   noiseBank,
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
 * const { problem, richest, line_scale } = prepared;
 * const { fit, fit_errors } = compareHypotheses(prepared, [["disc"]]).hypotheses[0]!;
 * const bank = noiseBank(problem, richest, { line_scale });
 * const grid = { cells: 3, half_width_kms: 600 };
 * const { limit } = detectionLimit(problem, { fit, fit_errors, bank, grid, trials: 100 });
 * assert(limit.fraction_95[4]! < 0.02);
 * ```
 */
export function detectionLimit(
  problem: Problem,
  options: DetectionLimitOptions,
): DetectionSearch {
  return atOnce(limitInSteps(problem, options));
}

/** The same, piece by piece. */
export function* limitInSteps(
  problem: Problem,
  options: DetectionLimitOptions,
): Steps<DetectionSearch> {
  const { fit, bank, sigma_kms = 60, false_alarm = 0.01, trials = 200, seed = 1 } = options;
  const { k_accretor_kms, k_donor_kms } = fit.state.binary;
  const grid = options.grid ?? {
    cells: 21,
    half_width_kms: Math.min(0.8 * problem.data.reach_kms, 2.5 * (k_accretor_kms + k_donor_kms)),
  };
  const tangent = tangentOf(options.fit_errors);
  const cells = yield* searchCells(problem, { grid, sigma_kms, fit, tangent });
  const noise = yield* searchNoise(problem, { fit, bank, tangent, trials, seed });
  const largest = new Float64Array(trials);
  const { refit = false } = options;
  // Signal to noise of each trial's noise at each place, and what fitting the place gains there.
  const found: { readonly signal: Float64Array; readonly gain: Float64Array }[] = [];
  for (const cell of cells) {
    if (found.length % grid.cells === 0) yield;
    const directions = refit ? refitDirections(problem, { cell, sigma_kms, fit, tangent }) : [];
    const signal = Float64Array.from(noise, (white, k) => {
      const here = dot(cell.filter, white);
      largest[k] = Math.max(largest[k]!, here);
      return here;
    });
    const gain = Float64Array.from(
      noise,
      (white) => directions.reduce((sum, direction) => sum + dot(direction, white) ** 2, 0),
    );
    found.push({ signal, gain });
  }
  const blind = upperQuantile(largest, false_alarm);
  const threshold = options.threshold === undefined ? blind.value : Math.sqrt(options.threshold);
  const threshold_error = options.threshold === undefined ? blind.error : 0;

  let light = 0;
  for (const [width] of fit.evaluation.amplitudes.values()) light += width!;
  const share = (flux: number) => flux / (light + flux);
  const power = normalQuantile(0.95);
  const limits = cells.map(({ strength }, c) => {
    if (!(strength > BLIND) || !(light > 0)) return { half: null, most: null, error: null };
    // The signal that each trial lacks to be found: its noise may help or hinder.
    const { signal, gain } = found[c]!;
    const lacking = signal.map((value, k) =>
      Math.sqrt(Math.max(0, threshold ** 2 - gain[k]!)) - value
    );
    const middle = median(lacking);
    const spread = deviation(lacking, middle);
    const own = spread * Math.sqrt((1 + power ** 2 / 2) / trials);
    const most = (middle + power * spread) / strength;
    return {
      half: share(middle / strength),
      most: share(most),
      error: Math.hypot(own, threshold_error) / strength * light / (light + most) ** 2,
    };
  });
  return {
    limit: {
      ...grid,
      sigma_kms,
      false_alarm,
      threshold,
      threshold_error,
      trials,
      fraction_50: limits.map(({ half }) => half),
      fraction_95: limits.map(({ most }) => most),
      fraction_95_error: limits.map(({ error }) => error),
    },
    cells,
    largest,
  };
}

function deviation(values: Float64Array, middle: number): number {
  const sum = values.reduce((total, value) => total + (value - middle) ** 2, 0);
  return Math.sqrt(sum / Math.max(1, values.length - 1));
}

/** The value that a share of a sample exceeds, between order statistics, with its error from theirs. */
function upperQuantile(
  values: Float64Array,
  share: number,
): { readonly value: number; readonly error: number } {
  const sorted = values.slice().sort().reverse();
  const at = (rank: number) => {
    const x = Math.min(sorted.length - 1, Math.max(0, rank));
    const k = Math.floor(x);
    const next = sorted[Math.min(sorted.length - 1, k + 1)]!;
    return sorted[k]! + (x - k) * (next - sorted[k]!);
  };
  const rank = share * (sorted.length + 1) - 1;
  const width = Math.sqrt(sorted.length * share * (1 - share));
  return { value: at(rank), error: (at(rank - width) - at(rank + width)) / 2 };
}
