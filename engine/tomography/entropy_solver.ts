import { NotConverged } from "../errors.ts";
import { type EntropyMeasure, POSITIVE_ENTROPY } from "./entropy_measure.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Samples } from "./map_fit.ts";
import { subspaceStep } from "./search_subspace.ts";
import { borrowMachine, type VectorMachine } from "./vector_machine.ts";

/** A maximum-entropy problem. */
export interface EntropyProblem {
  /** From an image to the samples. */
  readonly operator: LinearOperator;
  /** Data and errors; infinite errors mask. */
  readonly samples: Samples;
  /** The default image that belongs to an image: called once an iteration. */
  readonly prior: (image: Float64Array) => Float64Array;
  /** Image to start from. */
  readonly start: Float64Array;
  /**
   * Entropy.
   *
   * @default {POSITIVE_ENTROPY}
   */
  readonly measure?: EntropyMeasure;
}

/** Options of {@linkcode entropySteps} and {@linkcode solveEntropy}. */
export interface EntropyOptions {
  /**
   * Chi-square per sample to reach. Not used with a fixed multiplier.
   *
   * @default {1}
   */
  readonly reduced_chi_square?: number;
  /**
   * Whether a goal that is out of reach may be raised to just above what was reached. The state's `goal`
   * says which it was in the end. Otherwise such a goal is an error.
   *
   * @default {false}
   */
  readonly raise_goal?: boolean;
  /**
   * Fixed multiplier α of the objective χ² − α S, instead of a goal for chi-square.
   *
   * @default {null}
   */
  readonly multiplier?: number | null;
  /**
   * Tolerance of chi-square over its goal (with a fixed multiplier the gradients'
   * ratio must be as near to it as `misalignment` allows).
   *
   * @default {1e-3}
   */
  readonly chi_square_tolerance?: number;
  /**
   * Largest misalignment at the end.
   *
   * @default {0.01}
   */
  readonly misalignment?: number;
  /**
   * Largest number of iterations.
   *
   * @default {200}
   */
  readonly max_iterations?: number;
  /**
   * Number of past steps kept as search directions.
   *
   * @default {12}
   */
  readonly memory?: number;
  /**
   * Whether to do the arithmetic in TypeScript even where WebAssembly has SIMD: the same bits.
   *
   * @default {false}
   */
  readonly plain?: boolean;
}

/** Where a solution stands. */
export interface EntropyState {
  /** The image. */
  readonly image: Float64Array;
  /** Its samples. */
  readonly model: Float64Array;
  /** The default image that went with it. */
  readonly prior: Float64Array;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Chi-square per sample aimed for: higher than asked for when it was raised; null with a fixed multiplier. */
  readonly goal: number | null;
  /**
   * Half the squared difference of the unit gradients of entropy and chi-square, in the entropy's
   * metric: 0 at the solution, 1 where they are at right angles.
   */
  readonly misalignment: number;
  /** Entropy relative to the default image, in units of the image. */
  readonly entropy: number;
  /** Ratio of the two gradients: the multiplier α of the objective χ² − α S. */
  readonly multiplier: number;
  /** Iterations so far. */
  readonly iterations: number;
  /** Calls of `forward` and `adjoint` so far. */
  readonly operator_calls: number;
  /** Whether the goals are met. */
  readonly converged: boolean;
}

/** Largest share of the image's sum that the squared length of one step may have. */
const TRUST = 0.3;

/** A pixel falls to no less than this share of itself in one step. */
const LEAST_SHRINK = 0.4;

/** Chi-square counts as being at its goal within this share of it. */
const NEAR = 1e-3;

/** A goal is out of reach when so many steps in a row could not win this share of what is missing, */
const STALLED_STEPS = 5, STALLED_GAIN = 0.02;

/** or when chi-square has lost no more than this share of itself in so many steps. */
const PATIENCE = 10, LEAST_LOSS = 5e-3;

/** A raised goal is so many times what was reached: at the least chi-square itself the multiplier is zero. */
const RAISED = 1.02;

/**
 * Maximum entropy step by step. Each step searches the span of one new direction, the gradient of
 * χ² − α S in the entropy's metric, and of the last steps taken, whose samples are known: two calls
 * of the operator a step. The control within the span is that of Skilling & Bryan (1984, MNRAS
 * 211, 111).
 *
 * @param problem Operator, data, default image, start.
 * @param options Goal, tolerances.
 * @returns A generator of states, the last of which is the solution; it throws `NotConverged` with
 * the last state when the goal is out of reach or the iterations run out. The arrays of a state that
 * is not the last are the solver's own, and change with the next step.
 *
 * @example
 * ```ts
 * import { entropySteps } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const identity = (x: Float64Array, into: Float64Array = new Float64Array(x.length)) => {
 *   into.set(x);
 *   return into;
 * };
 * const steps = entropySteps({
 *   operator: { image_size: 2, sample_count: 2, forward: identity, adjoint: identity },
 *   samples: { flux: Float64Array.of(3, 1), error: Float64Array.of(0.1, 0.1) },
 *   prior: () => Float64Array.of(2, 2),
 *   start: Float64Array.of(2, 2),
 * });
 * let last = NaN;
 * for (const state of steps) last = state.reduced_chi_square;
 * assertAlmostEquals(last, 1, 1e-3);
 * ```
 */
export function* entropySteps(
  problem: EntropyProblem,
  options: EntropyOptions = {},
): Generator<EntropyState, void, void> {
  const { memory = 12, plain = false } = options;
  const { image_size, sample_count } = problem.operator;
  const bytes = 8 * ((memory + 8) * (image_size + 4) + (memory + 7) * (sample_count + 4));
  const { machine, giveBack } = borrowMachine(bytes, { plain });
  try {
    for (const state of stepsOn(machine, { ...options, problem })) {
      yield state.converged ? ownArrays(state) : state;
    }
  } catch (error) {
    if (!(error instanceof NotConverged)) throw error;
    throw new NotConverged(error.message, ownArrays(error.partial as EntropyState));
  } finally {
    giveBack();
  }
}

/** A state that stays what it is when the machine is used again. */
const ownArrays = (state: EntropyState): EntropyState => ({
  ...state,
  image: state.image.slice(),
  model: state.model.slice(),
});

function* stepsOn(
  machine: VectorMachine,
  options: EntropyOptions & { readonly problem: EntropyProblem },
): Generator<EntropyState, void, void> {
  const { problem } = options;
  const { samples, measure = POSITIVE_ENTROPY } = problem;
  const { multiplier: fixed = null, memory = 12, raise_goal = false } = options;
  const { chi_square_tolerance = 1e-3, misalignment: aligned = 0.01 } = options;
  const { max_iterations = 200 } = options;
  const size = problem.operator.image_size, count = problem.operator.sample_count;
  const weight = machine.vector(count), flux = machine.vector(count);
  let used = 0;
  for (let k = 0; k < count; k++) {
    const e = samples.error[k]!;
    if (!(e < Infinity)) continue;
    weight[k] = 1 / (e * e);
    flux[k] = samples.flux[k]!;
    used++;
  }
  let goal = options.reduced_chi_square ?? 1, target = goal * used;
  const operator = problem.operator.sparing?.(weight) ?? problem.operator;

  let calls = 0;
  const forward = (from: Float64Array, into: Float64Array) => {
    calls++;
    operator.forward(from, into);
  };
  const image = machine.vector(size), metric = machine.vector(size), slope = machine.vector(size);
  const pull = machine.vector(size), inverse = machine.vector(size);
  const model = machine.vector(count), residual = machine.vector(count);
  const spare = Array.from({ length: memory + 2 }, () => ({
    step: machine.vector(size),
    seen: machine.vector(count),
  }));
  const gradients = { metric, slope, pull };
  image.set(problem.start);
  forward(image, model);
  const directions: Direction[] = [];
  const history: number[] = [];
  let alpha = fixed, stalled = 0;

  for (let iterations = 0;; iterations++) {
    const prior = problem.prior(image);
    const entropy = measure.evaluate(image, prior, { gradient: slope, metric });
    const chi_square = machine.residuals({ model, flux, weight, residual });
    calls++;
    operator.adjoint(residual, pull);
    const [ss, cc, sc, total] = machine.norms(gradients);
    const multiplier = ss > 0 ? Math.sqrt(cc / ss) : 0;
    const misalignment = ss > 0 && cc > 0 ? 1 - sc / Math.sqrt(ss * cc) : cc > 0 ? 1 : 0;
    const reached = fixed === null
      ? Math.abs(chi_square / target - 1) <= chi_square_tolerance
      : Math.abs(multiplier / fixed - 1) <= Math.sqrt(2 * aligned);
    const converged = reached && misalignment <= aligned;
    const reduced_chi_square = chi_square / used;
    const state: EntropyState = {
      ...{ image, model, prior },
      ...{ reduced_chi_square, goal: fixed === null ? goal : null },
      ...{ misalignment, entropy, multiplier },
      ...{ iterations, operator_calls: calls, converged },
    };
    yield state;
    if (converged) return;
    if (iterations >= max_iterations) throw unfinished(state, goal);

    alpha ??= multiplier > 0 ? multiplier : null;
    // At the goal the new direction must not move chi-square, or every step would be undone.
    const near = fixed === null && Math.abs(chi_square / target - 1) < NEAR;
    if (near && sc > 0) alpha = cc / sc;
    const fresh = spare.pop()!;
    const length = machine.direction({ ...gradients, step: fresh.step }, alpha ?? 0);
    machine.scale(fresh.step, 1 / Math.sqrt(length > 0 ? length : 1));
    forward(fresh.step, fresh.seen);
    remember(directions, { fresh, machine, weight });

    machine.invert(metric, inverse);
    const steps = directions.map((d) => d.step);
    const chosen = subspaceStep({
      metric: machine.gram(steps, inverse),
      curvature: curvatureMatrix(directions),
      entropy_slope: machine.dots(slope, steps),
      chi_slope: machine.dots(pull, steps),
      chi_square,
    }, { target: fixed === null ? target : null, multiplier: fixed, longest: TRUST * total });
    if (fixed === null) {
      alpha = chosen.multiplier;
      const missing = chi_square - target;
      const gain = chi_square - chosen.least_chi_square;
      stalled = !near && missing > 0 && gain < STALLED_GAIN * missing ? stalled + 1 : 0;
      history.push(chi_square);
      const before = history[history.length - 1 - PATIENCE];
      const slow = missing > 3 * NEAR * target && before !== undefined &&
        iterations > 2 * PATIENCE &&
        chi_square > (1 - LEAST_LOSS) * before;
      if (slow || stalled >= STALLED_STEPS) {
        if (!raise_goal) throw outOfReach(state, goal);
        goal = RAISED * reduced_chi_square;
        target = goal * used;
        stalled = 0;
      }
    }

    const taken = spare.pop()!;
    machine.combine(steps, chosen.coefficients, taken.step);
    machine.combine(directions.map((d) => d.seen), chosen.coefficients, taken.seen);
    spare.push(directions.shift()!);
    const held = machine.advance(image, taken.step, measure.positive ? LEAST_SHRINK : -1);
    if (held > 0) forward(taken.step, taken.seen);
    machine.add(model, taken.seen);
    const [square = 0] = machine.weightedDots(taken.step, inverse, [taken.step]);
    if (square > 0) {
      const unit = 1 / Math.sqrt(square);
      machine.scale(taken.step, unit);
      machine.scale(taken.seen, unit);
      if (directions.length === memory) spare.push(directions.pop()!);
      remember(directions, { fresh: taken, machine, weight });
    } else spare.push(taken);
  }
}

/**
 * Runs {@linkcode entropySteps} to its end.
 *
 * @param problem Operator, data, default image, start.
 * @param options Goal, tolerances.
 * @returns The solution.
 * @throws {NotConverged} With the last state when the goal is out of reach or the iterations run out.
 *
 * @example
 * ```ts
 * import { solveEntropy } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const identity = (x: Float64Array, into: Float64Array = new Float64Array(x.length)) => {
 *   into.set(x);
 *   return into;
 * };
 * const { image } = solveEntropy({
 *   operator: { image_size: 1, sample_count: 1, forward: identity, adjoint: identity },
 *   samples: { flux: Float64Array.of(3), error: Float64Array.of(0.1) },
 *   prior: () => Float64Array.of(2),
 *   start: Float64Array.of(2),
 * });
 * assertAlmostEquals(image[0] ?? NaN, 2.9, 1e-4); // one error off the data
 * ```
 */
export function solveEntropy(problem: EntropyProblem, options: EntropyOptions = {}): EntropyState {
  let last: EntropyState | undefined;
  for (const state of entropySteps(problem, options)) last = state;
  return last!;
}

interface Direction {
  /** In the image, of unit length in the metric it was made in. */
  readonly step: Float64Array;
  /** In the samples. */
  readonly seen: Float64Array;
  /** Second derivatives of chi-square with itself and the directions after it. */
  readonly curvature: Float64Array;
}

/** Puts a direction before the others, with the second derivatives of chi-square it takes part in. */
function remember(
  directions: Direction[],
  { fresh, machine, weight }: {
    readonly fresh: Pick<Direction, "step" | "seen">;
    readonly machine: VectorMachine;
    readonly weight: Float64Array;
  },
): void {
  const all = [fresh.seen, ...directions.map((d) => d.seen)];
  const curvature = machine.weightedDots(fresh.seen, weight, all).map((c) => 2 * c);
  directions.unshift({ step: fresh.step, seen: fresh.seen, curvature });
}

function curvatureMatrix(directions: readonly Direction[]): Float64Array {
  const count = directions.length;
  const matrix = new Float64Array(count * count);
  directions.forEach((d, a) => {
    for (let b = a; b < count; b++) {
      matrix[a * count + b] = matrix[b * count + a] = d.curvature[b - a]!;
    }
  });
  return matrix;
}

function unfinished(state: EntropyState, goal: number): NotConverged<EntropyState> {
  return new NotConverged(
    `Cannot finish maximum-entropy map in ${state.iterations} iterations: reduced chi-square is ` +
      `${state.reduced_chi_square.toPrecision(5)} for ${goal}, misalignment ` +
      `${state.misalignment.toPrecision(2)}; allow more iterations`,
    state,
  );
}

function outOfReach(state: EntropyState, goal: number): NotConverged<EntropyState> {
  const reached = state.reduced_chi_square;
  return new NotConverged(
    `Cannot fit maximum-entropy map to reduced chi-square ${goal}: it stalled at ` +
      `${
        reached.toPrecision(5)
      } after ${state.iterations} iterations, as no map of this kind fits the ` +
      `data so closely; set map.reduced_chi_square to ${(RAISED * reached).toPrecision(3)} or more`,
    state,
  );
}
