import { chiSquareTail, median, normalTail } from "../numerics/mod.ts";
import { dot } from "./brightnesses.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import type { Problem } from "./problem.ts";

/** One test of residuals. */
export interface ResidualTest {
  /** The statistic: a chi-square, or a number of standard deviations. */
  readonly statistic: number;
  /** Degrees of freedom; null for a normal deviate. */
  readonly dof: number | null;
  /** Probability of so large a statistic where the model is right. */
  readonly probability: number;
}

/** Tests of whether a model explains the data by itself, whatever other models do. */
export interface ResidualTests {
  /** Total of chi-square, with the uncertainty of the errors' scale. */
  readonly chi_square: ResidualTest;
  /** Mean residual along velocity in the accretor's frame: a wrong profile. */
  readonly profile: ResidualTest;
  /** Residuals in cells of phase and velocity, less their mean over phase: a wrong change. */
  readonly phase: ResidualTest;
  /** Correlation of neighbouring pixels along velocity. */
  readonly velocity_correlation: ResidualTest;
  /** Correlation of neighbouring exposures along phase. */
  readonly phase_correlation: ResidualTest;
}

/** A model is adequate when no test is as improbable as this. */
export const ADEQUATE = 1e-3;

const LARGEST_PHASE_BINS = 12;
/** Full width at half maximum of a Gaussian over its standard deviation. */
const FWHM = 2 * Math.sqrt(2 * Math.log(2));

/**
 * Tests the residuals of a fit. All but the first use the noise that neighbouring pixels show, so
 * that errors which are wrong by a factor do not matter. The degrees of freedom are not lowered by
 * the fitted numbers, so the tests object a little too seldom rather than too often.
 *
 * @param problem The problem.
 * @param fit Its fit.
 * @returns The tests.
 *
 * @example
 * ```ts
 * import {
 *   isAdequate,
 *   prepareProblem,
 *   residualTests,
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
 * assert(isAdequate(residualTests(prepared.problem, prepared.richest)));
 * ```
 */
export function residualTests(problem: Problem, fit: HypothesisFit): ResidualTests {
  const { data, whitening } = problem;
  const { residual } = fit.evaluation;
  const { sampling, pixels_per_sample } = data;
  const samples = residual.length;
  const spent = whitening.baseline_parameters + fit.parameters.length +
    fit.evaluation.active.length;
  const dof = Math.max(1, samples - spent);
  const sum = dot(residual, residual);
  const width = Math.sqrt(
    2 * dof * pixels_per_sample + (2 * dof * data.noise_scale_error) ** 2,
  );
  const noise = pixelNoise(problem, residual);
  const normal = (statistic: number): ResidualTest => ({
    statistic,
    dof: null,
    probability: normalTail(statistic),
  });
  const square = (statistic: number, freedom: number): ResidualTest => ({
    statistic,
    dof: freedom,
    probability: freedom > 0 ? chiSquareTail(statistic, freedom) : 1,
  });

  const { cells, phases, velocities } = cellMeans(problem, fit);
  const variance = noise * noise * pixels_per_sample;
  let profile = 0, change = 0, profileFreedom = 0, changeFreedom = 0;
  for (let b = 0; b < velocities; b++) {
    let weight = 0, mean = 0, used = 0;
    for (let a = 0; a < phases; a++) {
      const { count, total } = cells[a * velocities + b]!;
      if (count === 0) continue;
      used++;
      weight += count;
      mean += total;
    }
    if (weight === 0) continue;
    profile += mean * mean / weight / variance;
    profileFreedom++;
    mean /= weight;
    for (let a = 0; a < phases; a++) {
      const { count, total } = cells[a * velocities + b]!;
      if (count > 0) change += count * (total / count - mean) ** 2 / variance;
    }
    changeFreedom += used - 1;
  }

  const resolution = median(sampling.profile_sigma_kms) * FWHM;
  const lags = Math.max(1, Math.round(resolution / median(sampling.pixel_kms)));
  return {
    chi_square: normal((sum - dof) / width),
    profile: square(profile, profileFreedom),
    phase: square(change, changeFreedom),
    velocity_correlation: normal(alongVelocity(problem, residual, { lags, noise, spent })),
    phase_correlation: normal(alongPhase(problem, whitening.bare(residual), { noise })),
  };
}

/**
 * Whether no test objects.
 *
 * @param tests The tests.
 * @returns True when every probability is at least 0.001.
 *
 * @example
 * ```ts
 * import { isAdequate } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * const good = { statistic: 0, dof: null, probability: 0.5 };
 * const bad = { ...good, probability: 1e-5 };
 * const tests = {
 *   chi_square: good,
 *   profile: good,
 *   phase: good,
 *   velocity_correlation: good,
 *   phase_correlation: good,
 * };
 * assertEquals([isAdequate(tests), isAdequate({ ...tests, phase: bad })], [true, false]);
 * ```
 */
export function isAdequate(tests: ResidualTests): boolean {
  return Object.values(tests).every(({ probability }: ResidualTest) => probability >= ADEQUATE);
}

/** Standard deviation that differences of neighbouring pixels show. */
function pixelNoise({ data }: Problem, residual: Float64Array): number {
  const { count, start } = data.sampling;
  const correlation = data.lag_correlation[0] ?? 0;
  let sum = 0, pairs = 0;
  for (let i = 0; i < count; i++) {
    for (let n = start[i]! + 1; n < start[i + 1]!; n++) {
      sum += (residual[n]! - residual[n - 1]!) ** 2;
      pairs++;
    }
  }
  return Math.sqrt(sum / pairs / 2 / Math.max(0.1, 1 - correlation));
}

interface Cell {
  count: number;
  total: number;
}

/** Sums of residuals by phase and by velocity from the accretor, in bins of two resolution elements. */
function cellMeans({ data }: Problem, fit: HypothesisFit): {
  readonly cells: readonly Cell[];
  readonly phases: number;
  readonly velocities: number;
} {
  const { sampling } = data;
  const { count, start, phase, velocity_kms } = sampling;
  const { binary, systemic_kms, phase: shift } = fit.state;
  const width = Math.max(
    2 * FWHM * median(sampling.profile_sigma_kms),
    3 * median(sampling.pixel_kms),
  );
  const reach = data.reach_kms + Math.abs(systemic_kms) + binary.k_accretor_kms;
  const velocities = Math.ceil(2 * reach / width);
  const phases = Math.max(1, Math.min(LARGEST_PHASE_BINS, Math.floor(count / 2)));
  const cells = Array.from({ length: phases * velocities }, (): Cell => ({ count: 0, total: 0 }));
  const order = [...phase.keys()].sort((a, b) => phase[a]! - phase[b]!);
  order.forEach((i, rank) => {
    const a = Math.floor(rank * phases / count);
    const accretor = systemic_kms -
      binary.k_accretor_kms * Math.sin(2 * Math.PI * (phase[i]! + shift));
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      const b = Math.floor((velocity_kms[n]! - accretor + reach) / width);
      const cell = cells[a * velocities + Math.min(velocities - 1, Math.max(0, b))]!;
      cell.count++;
      cell.total += fit.evaluation.residual[n]!;
    }
  });
  return { cells, phases, velocities };
}

function alongVelocity(
  { data }: Problem,
  residual: Float64Array,
  { lags, noise, spent }: {
    readonly lags: number;
    readonly noise: number;
    readonly spent: number;
  },
): number {
  const { count, start } = data.sampling;
  let sum = 0, pairs = 0, expected = 0;
  for (let lag = 1; lag <= lags; lag++) {
    let here = 0;
    for (let i = 0; i < count; i++) {
      for (let n = start[i]! + lag; n < start[i + 1]!; n++) {
        sum += residual[n]! * residual[n - lag]!;
        here++;
      }
    }
    pairs += here;
    expected += here * (data.lag_correlation[lag - 1] ?? 0);
  }
  // Smooth patterns that were fitted leave neighbours slightly anticorrelated.
  expected -= pairs * spent / residual.length;
  return (sum / noise ** 2 - expected) / Math.sqrt(pairs * data.pixels_per_sample);
}

/** Of residuals without what flickering may have left, which neighbours share. */
function alongPhase(
  { data }: Problem,
  residual: Float64Array,
  { noise }: { readonly noise: number },
): number {
  const { count, start, velocity_kms, pixel_kms } = data.sampling;
  let sum = 0, pairs = 0;
  for (let i = 1; i < count; i++) {
    let m = start[i - 1]!;
    const to = start[i]!;
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      const v = velocity_kms[n]!;
      while (m + 1 < to && Math.abs(velocity_kms[m + 1]! - v) <= Math.abs(velocity_kms[m]! - v)) {
        m++;
      }
      if (Math.abs(velocity_kms[m]! - v) > 0.75 * pixel_kms[n]!) continue;
      sum += residual[n]! * residual[m]!;
      pairs++;
    }
  }
  return pairs === 0 ? 0 : sum / noise ** 2 / Math.sqrt(pairs * data.pixels_per_sample);
}
