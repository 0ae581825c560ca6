import type { Warning } from "../errors.ts";
import { informationCriteria } from "../numerics/mod.ts";
import { dot } from "./brightnesses.ts";
import { type FitErrors, fitErrors } from "./fit_errors.ts";
import { fitInSteps, type HypothesisFit, total, valuesOf } from "./fit_hypothesis.ts";
import { type FittedValues, fittedValues } from "./fitted_values.ts";
import { type Hypothesis, hypothesisName, isNested } from "./hypothesis.ts";
import { lineOf } from "./line_of.ts";
import type { PreparedProblem } from "./prepare_problem.ts";
import type { Problem } from "./problem.ts";
import { isAdequate, type ResidualTests, residualTests } from "./residual_tests.ts";
import { atOnce, type Steps } from "./work_in_steps.ts";

/** One hypothesis, fitted and tested. */
export interface WeighedHypothesis extends FittedValues {
  /** The parts. */
  readonly parts: Hypothesis;
  /** The fit. */
  readonly fit: HypothesisFit;
  /** Joint errors of all that was fitted. */
  readonly fit_errors: FitErrors;
  /** Chi-square of the data, nuisances marginalised, and of the priors of the geometry. */
  readonly chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** Numbers that were free and are not on a bound: of the model, amplitudes, baselines. */
  readonly free_parameters: number;
  /** The same, each counted by the share that the data and not a prior determine. */
  readonly effective_parameters: number;
  /** Akaike's criterion for small samples. */
  readonly aicc: number;
  /** Schwarz's criterion. */
  readonly bic: number;
  /** Whether no residual test objects. */
  readonly adequate: boolean;
  /** Root mean square of what the model misses over that of the line, both in units of the noise. */
  readonly misfit_fraction: number;
  /** Tests of its residuals. */
  readonly residual_tests: ResidualTests;
  /** What to know about the fit. */
  readonly warnings: readonly Warning[];
}

/** Hypotheses fitted to one line. */
export interface Comparison {
  /** Best supported (lowest AICc) first. */
  readonly hypotheses: readonly WeighedHypothesis[];
  /** Scatter of the residuals of the fit with all parts over the stated errors. */
  readonly noise_scale: number;
  /** Its standard deviation. */
  readonly noise_scale_error: number;
}

/** A richer hypothesis that gains less than this is fitted again from the simpler one. */
const LEFT_BEHIND = 1;

/** Starts that end within this of the best in chi-square agree with it. */
const DISAGREE = 0.5;

/**
 * Fits hypotheses to the same data and orders them by support. A richer one that gains nothing goes on
 * from the best fit of those it contains, so that a part more never fits worse.
 *
 * @param prepared The problem with its nuisances measured.
 * @param sets The hypotheses.
 * @param options Starts per hypothesis, and the seed of random ones.
 * @returns The hypotheses, best supported first.
 *
 * @example
 * ```ts
 * import {
 *   compareHypotheses,
 *   prepareProblem,
 *   simulateTrail,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assert, assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { hypotheses } = compareHypotheses(prepared, sets);
 * assertEquals(hypotheses.length, 2);
 * assert(hypotheses[0]!.aicc <= hypotheses[1]!.aicc);
 * ```
 */
export function compareHypotheses(
  prepared: PreparedProblem,
  sets: readonly Hypothesis[],
  options: { readonly starts?: number; readonly seed?: number } = {},
): Comparison {
  return atOnce(compareInSteps(prepared, sets, options));
}

/** The same, piece by piece. */
export function* compareInSteps(
  prepared: PreparedProblem,
  sets: readonly Hypothesis[],
  { starts = 2, seed = 1 }: { readonly starts?: number; readonly seed?: number } = {},
): Steps<Comparison> {
  const { problem, richest } = prepared;
  const fits: HypothesisFit[] = [];
  const warm = valuesOf(richest);
  for (const hypothesis of [...sets].sort((a, b) => a.length - b.length)) {
    let best = yield* fitInSteps(problem, { hypothesis, warm, starts, seed });
    const inner = fits.filter((fit) => isNested(fit.hypothesis, hypothesis));
    const base = inner.reduce<HypothesisFit | null>(
      (a, b) => a === null || total(b) < total(a) ? b : a,
      null,
    );
    if (base !== null && total(best) > total(base) - LEFT_BEHIND) {
      const other = yield* fitInSteps(problem, { hypothesis, base });
      const reached = [...best.starts, ...other.starts].sort((a, b) => a - b);
      best = { ...total(other) < total(best) ? other : best, starts: reached };
    }
    fits.push(best);
  }

  const all = Math.min(richest.chi_square, ...fits.map((fit) => fit.chi_square));
  const spent = problem.whitening.baseline_parameters + richest.parameters.length +
    richest.evaluation.active.length;
  const dof = Math.max(1, problem.observed.length - spent);
  const noise_scale = Math.sqrt(all / dof);
  const hypotheses: WeighedHypothesis[] = [];
  for (const fit of fits) {
    yield;
    hypotheses.push(weighed(problem, { fit, noise_scale }));
  }
  return {
    hypotheses: hypotheses.sort((a, b) => a.aicc - b.aicc),
    noise_scale,
    noise_scale_error: noise_scale * Math.sqrt(problem.data.pixels_per_sample / (2 * dof)),
  };
}

/** What there is to say of one fit. */
function weighed(
  problem: Problem,
  { fit, noise_scale }: { readonly fit: HypothesisFit; readonly noise_scale: number },
): WeighedHypothesis {
  const { data, whitening } = problem;
  const scale = noise_scale * Math.sqrt(data.pixels_per_sample);
  const errors = fitErrors(problem, fit, { scale });
  const amplitudes = errors.names.length - fit.parameters.length;
  const held = fit.at_bound.filter((bound) => bound !== null).length;
  const size = errors.names.length;
  // A part that ended without light was free to have some.
  let effective = whitening.parameters + amplitudes;
  fit.parameters.forEach(({ prior }, j) => {
    if (fit.at_bound[j] !== null) return;
    const share = prior === null ? 1 : 1 - errors.covariance[j * size + j]! / prior ** 2;
    effective += Math.min(1, Math.max(0, share));
  });
  const baselines = data.sampling.count * (1 + (problem.options.baseline_order ?? 1));
  const chi_square = total(fit);
  const { aicc, bic } = informationCriteria(chi_square / noise_scale ** 2, {
    parameters: effective,
    samples: problem.observed.length / data.pixels_per_sample,
  });
  const tests = residualTests(problem, fit);
  const dof = problem.observed.length - effective;
  const line = lineOf(problem, fit).map((value, n) => value / data.error[n]!);
  return {
    parts: fit.hypothesis,
    fit,
    fit_errors: errors,
    chi_square,
    sample_count: problem.observed.length,
    free_parameters: baselines + fit.parameters.length - held + amplitudes,
    effective_parameters: effective,
    aicc,
    bic,
    adequate: isAdequate(tests),
    misfit_fraction: Math.sqrt(Math.max(0, fit.chi_square - dof) / dot(line, line)),
    residual_tests: tests,
    ...fittedValues(problem, fit, errors),
    warnings: fitWarnings(fit, errors),
  };
}

function fitWarnings(fit: HypothesisFit, errors: FitErrors): Warning[] {
  const name = hypothesisName(fit.hypothesis);
  const warnings: Warning[] = [];
  const warn = (code: string, told: readonly string[], rest = "") => {
    if (told.length > 0) warnings.push({ code, text: `${name}: ${told.join(", ")}${rest}` });
  };
  const { amplitudes } = fit.evaluation;
  const dark = [...amplitudes].flatMap(([part, [width]]) => width === 0 ? [part as string] : []);
  warn("part-dark", dark, " without light: the fit does not use it");
  const bound = fit.parameters.flatMap(({ path, section, low, high, unit }, j) => {
    const side = fit.at_bound[j] ?? null;
    // Where a part is dark, its numbers mean nothing.
    if (side === null || dark.includes(section)) return [];
    const value = side === "lower" ? low : high;
    return [`${path} = ${+value.toPrecision(4)} ${unit}`.trim()];
  });
  warn("parameter-at-bound", bound, " at the end of the range that was allowed");
  warn(
    "parts-degenerate",
    errors.degenerate.map(([a, b]) => `${a} with ${b}`),
    " cannot be told apart: their errors are correlated by more than 0.98",
  );
  if (!fit.converged) warn("fit-not-converged", ["the iterations ended before chi-square settled"]);
  const agree = fit.starts.filter((start) => start <= fit.starts[0]! + DISAGREE).length;
  if (fit.starts.length > 1 && agree === 1) {
    const next = fit.starts[1]! - fit.starts[0]!;
    const told = `none of the other ${fit.starts.length - 1} starts ended in the best minimum`;
    warn("starts-disagree", [told], `: the next one is ${next.toFixed(1)} higher in chi-square`);
  }
  const disc = amplitudes.get("disc") ?? [];
  const wild = [["one-armed", 1], ["two-armed", 3]].flatMap(([pattern, at]) => {
    const [cosine = 0, sine = 0] = disc.slice(at as number);
    const amplitude = Math.hypot(cosine, sine) / (disc[0] || 1);
    return amplitude > 1
      ? [`the disc's ${pattern} pattern of amplitude ${amplitude.toFixed(2)}`]
      : [];
  });
  warn("asymmetry-unphysical", wild, " would make its brightness negative somewhere");
  return warnings;
}
