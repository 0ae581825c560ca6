import { WorkError } from "../errors.ts";
import { type LeastSquaresFit, minimise, randomStream } from "../numerics/mod.ts";
import { type FreeParameter, freeParameters } from "./free_parameters.ts";
import { type Hypothesis, hypothesisName } from "./hypothesis.ts";
import { type ParameterState, stateOf } from "./parameter_state.ts";
import { coarseStart, isOtherPlace, randomStart, startValues } from "./fit_starts.ts";
import {
  evaluate,
  type Evaluation,
  type Problem,
  sumOfSquares,
  withGeometryHeld,
} from "./problem.ts";
import { isScanned, scan } from "./scan.ts";
import { atOnce, type Steps } from "./work_in_steps.ts";

/** A hypothesis fitted to a problem's data. */
export interface HypothesisFit {
  /** The parts. */
  readonly hypothesis: Hypothesis;
  /** What was varied, K parameters. */
  readonly parameters: readonly FreeParameter[];
  /** Values reached, K. */
  readonly values: Float64Array;
  /** Model's numbers and geometry at those values. */
  readonly state: ParameterState;
  /** Amplitudes, and the whitened residual. */
  readonly evaluation: Evaluation;
  /** Sum of squared whitened residuals: chi-square of the data, nuisances marginalised. */
  readonly chi_square: number;
  /** Chi-square of the priors of the geometry. */
  readonly prior_chi_square: number;
  /** For each parameter the bound it ended on, or null. */
  readonly at_bound: readonly ("lower" | "upper" | null)[];
  /** Whether the iterations met their goal. */
  readonly converged: boolean;
  /** Iterations of the start that won. */
  readonly iterations: number;
  /** Total of chi-square reached from each start, best first. */
  readonly starts: readonly number[];
}

/** Options of {@linkcode fitHypothesis}. */
export interface FitOptions {
  /** The parts. */
  readonly hypothesis: Hypothesis;
  /**
   * A fit of fewer parts to the same data, from which this one goes on: only the parts that it lacks
   * are looked for.
   *
   * @default A fit of the parts that need not be looked for
   */
  readonly base?: HypothesisFit;
  /**
   * Values to start from, by path, as from a fit of data of the same kind. Without them the disc's
   * numbers are looked for on a grid.
   */
  readonly warm?: ReadonlyMap<string, number>;
  /**
   * How many of the best places of a part's grid are followed; with more than one, another start
   * is drawn at random.
   *
   * @default {1}
   */
  readonly starts?: number;
  /**
   * Seed of the random start.
   *
   * @default {1}
   */
  readonly seed?: number;
}

/** Relative change of chi-square and parameters at which a fit ends. */
const TOLERANCE = 1e-6;
const MAX_ITERATIONS = 40;

/**
 * Fits a hypothesis: the numbers that the model is not linear in by Levenberg–Marquardt, the parts'
 * brightnesses (not negative) and every exposure's baseline solved inside. The disc comes first; each
 * further part is put where a matched filter gains most, and then everything is fitted together.
 *
 * @param problem The problem.
 * @param options The hypothesis, and where to start.
 * @returns The best fit of all starts.
 * @throws {WorkError} When no start gives a model that can be.
 *
 * @example
 * ```ts
 * import { fitHypothesis, makeProblem, simulateTrail, weighingData } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const model = { parts: ["disc"], disc: { outer_radius_over_a: 0.35 } } as const;
 * const trail = simulateTrail(model, { binary, exposures: 20, seed: 1 });
 * const problem = makeProblem(weighingData(trail), { binary });
 * const fit = fitHypothesis(problem, { hypothesis: ["disc"] });
 * assertAlmostEquals(fit.state.model.disc.outer_radius_over_a, 0.35, 0.02);
 * ```
 */
export function fitHypothesis(problem: Problem, options: FitOptions): HypothesisFit {
  return atOnce(fitInSteps(problem, options));
}

/** The same, piece by piece. */
export function* fitInSteps(problem: Problem, options: FitOptions): Steps<HypothesisFit> {
  const { hypothesis, starts = 1, seed = 1 } = options;
  const parameters = freeParameters(hypothesis, problem.setup);
  const base = options.base ?? (yield* fitSteady(problem, options));
  const settled = base === null ? new Map<string, number>() : valuesOf(base);
  const best: ReadonlyMap<string, number>[] = [settled];
  const scanned = hypothesis.filter((part) => isScanned(part) && !base?.hypothesis.includes(part));
  for (const part of scanned) {
    const head = best[0]!;
    const before = hypothesis.filter((name) =>
      !scanned.includes(name) || scanned.indexOf(name) < scanned.indexOf(part)
    );
    yield;
    const found = scan(problem, { part, base: evaluateAt(problem, before, head) });
    if (found.length === 0) continue;
    const [first, ...rest] = found;
    best[0] = new Map([...head, ...first!.values]);
    // A second start from another place of the last part that is looked for.
    const other = rest.filter(({ values }) => isOtherPlace(values, first!.values)).slice(
      0,
      starts - 1,
    );
    best.splice(1, best.length, ...other.map(({ values }) => new Map([...head, ...values])));
  }
  if (starts > 1 && scanned.length > 0) {
    best.push(randomStart(parameters, { settled, random: randomStream(seed) }));
  }

  const from = (start: ReadonlyMap<string, number>) =>
    fitFrom(problem, { hypothesis, parameters, start });
  const fits: HypothesisFit[] = [];
  // Where the disc went to alone, another part may be impossible: then from what the model gives.
  for (const start of [...best, new Map<string, number>()]) {
    if (start.size === 0 && fits.length > 0) break;
    yield;
    const fit = from(start);
    if (fit !== null) fits.push(fit);
  }
  fits.sort((a, b) => total(a) - total(b));
  if (fits.length === 0) {
    throw new WorkError({
      action: `fit ${hypothesisName(hypothesis)}`,
      reason: "none of the starts is a model that can be",
      remedy: "check the binary and the model's radii",
    });
  }
  return { ...fits[0]!, starts: fits.map(total) };
}

/** Values of a fit's parameters by path: what a later fit may start from. */
export function valuesOf(fit: HypothesisFit): ReadonlyMap<string, number> {
  return new Map(fit.parameters.map(({ path }, j) => [path, fit.values[j]!]));
}

/** Chi-square of data and priors together. */
export function total(fit: Pick<HypothesisFit, "chi_square" | "prior_chi_square">): number {
  return fit.chi_square + fit.prior_chi_square;
}

/**
 * The fit of parts that are not looked for on a grid; the disc's numbers may be. The geometry is
 * held, or a disc alone would bend it to take what is another part's.
 */
function* fitSteady(
  problem: Problem,
  { hypothesis, warm }: FitOptions,
): Steps<HypothesisFit | null> {
  const steady = hypothesis.filter((part) => !isScanned(part));
  if (steady.length === 0) return null;
  const held = withGeometryHeld(problem);
  const parameters = freeParameters(steady, held.setup);
  const start = warm ?? coarseStart(held, { hypothesis: steady, parameters });
  yield;
  return fitFrom(held, { hypothesis: steady, parameters, start });
}

function evaluateAt(
  problem: Problem,
  hypothesis: Hypothesis,
  at: ReadonlyMap<string, number>,
): Evaluation {
  const parameters = freeParameters(hypothesis, problem.setup);
  const values = startValues(parameters, at);
  const state = stateOf(hypothesis, { setup: problem.setup, parameters })(values);
  return evaluate(problem, { hypothesis, state }) ??
    { amplitudes: new Map(), active: [], residual: problem.observed, extra: 0 };
}

function fitFrom(
  problem: Problem,
  { hypothesis, parameters, start }: {
    readonly hypothesis: Hypothesis;
    readonly parameters: readonly FreeParameter[];
    readonly start: ReadonlyMap<string, number>;
  },
): HypothesisFit | null {
  const state = stateOf(hypothesis, { setup: problem.setup, parameters });
  const samples = problem.observed.length;
  const priors = parameters.flatMap(({ prior, start }, j) =>
    prior === null ? [] : [{ j, centre: start, sigma: prior }]
  );
  const residuals = (values: Float64Array) => {
    const made = evaluate(problem, { hypothesis, state: state(values) });
    if (made === null) return new Float64Array(samples + priors.length).fill(NaN);
    if (priors.length === 0) return made.residual;
    const all = new Float64Array(samples + priors.length);
    all.set(made.residual);
    priors.forEach(({ j, centre, sigma }, i) => all[samples + i] = (values[j]! - centre) / sigma);
    return all;
  };
  const from = startValues(parameters, start);
  let fit: Pick<LeastSquaresFit, "parameters" | "at_bound" | "converged" | "iterations">;
  if (parameters.length === 0) {
    fit = { parameters: from, at_bound: [], converged: true, iterations: 0 };
  } else {
    if (!Number.isFinite(residuals(from)[0]!)) return null;
    fit = minimise(residuals, from, {
      lower: parameters.map(({ low }) => low),
      upper: parameters.map(({ high }) => high),
      typical: parameters.map(({ typical }) => typical),
      tolerance: TOLERANCE,
      max_iterations: MAX_ITERATIONS,
    });
  }
  const reached = state(fit.parameters);
  const evaluation = evaluate(problem, { hypothesis, state: reached })!;
  return {
    hypothesis,
    parameters,
    values: fit.parameters,
    state: reached,
    evaluation,
    chi_square: sumOfSquares(evaluation.residual),
    prior_chi_square: priors.reduce(
      (sum, { j, centre, sigma }) => sum + ((fit.parameters[j]! - centre) / sigma) ** 2,
      0,
    ),
    at_bound: fit.at_bound,
    converged: fit.converged,
    iterations: fit.iterations,
    starts: [],
  };
}
