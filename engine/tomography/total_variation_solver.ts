import { NotConverged } from "../errors.ts";
import { fourierMetric } from "./fourier_metric.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Samples } from "./map_fit.ts";
import { knownBound, largestRatio } from "./variation_bound.ts";

/** A total-variation problem on a square image. */
export interface VariationProblem {
  /** From an image to the samples. */
  readonly operator: LinearOperator;
  /** Data and errors; infinite errors mask. */
  readonly samples: Samples;
  /** Pixels along a side of the image. */
  readonly pixels: number;
  /** Typical value of the image: it sets units, and the meaning of the weight. */
  readonly level: number;
  /** Standard deviation of the profile, pixels: where the operator stops to see. */
  readonly profile_pixels: number;
  /** Image to start from. */
  readonly start: Float64Array;
}

/** Options of {@linkcode variationSteps}. */
export interface VariationOptions {
  /**
   * Weight β of the objective ½χ² + β Σ |∇(f/level)|. `noise`: three times the noise of the data's
   * gradient with respect to a pixel, times the profile's σ in pixels, which just keeps noise from
   * making structure. Not used when chi-square is given.
   *
   * @default {"noise"}
   */
  readonly weight?: number | "noise";
  /**
   * Chi-square per sample to reach by changing the weight; null for the weight given.
   *
   * @default {null}
   */
  readonly reduced_chi_square?: number | null;
  /**
   * Relative change of the image over ten steps below which it counts as settled.
   *
   * @default {0.005}
   */
  readonly settled?: number;
  /**
   * Tolerance of chi-square over its goal.
   *
   * @default {5e-3}
   */
  readonly chi_square_tolerance?: number;
  /**
   * Largest number of iterations.
   *
   * @default {400}
   */
  readonly max_iterations?: number;
}

/** Where a solution stands. */
export interface VariationState {
  /** The image, not negative. */
  readonly image: Float64Array;
  /** Samples of the image before what little was negative was taken away. */
  readonly model: Float64Array;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Weight β. */
  readonly weight: number;
  /** Σ |∇(f/level)|. */
  readonly variation: number;
  /** Relative change of the image over the last ten iterations. */
  readonly change: number;
  /** Iterations so far. */
  readonly iterations: number;
  /** Calls of `forward` and `adjoint` so far. */
  readonly operator_calls: number;
  /** Whether the goals are met. */
  readonly converged: boolean;
}

/** Iterations between two looks at change and weight. */
const LOOK = 10;

/** Dual step size over the weight: at first, its decay per iteration, at last. */
const FIRST_DUAL = 8, DUAL_DECAY = 0.9, LAST_DUAL = 0.04;

/** The same after the weight has changed. */
const RESUMED_DUAL = 1;

/** Dual step of positivity over that of the gradient. */
const POSITIVITY = 0.1;

/** What the operator's response is taken to be between the exposures' directions. */
const BETWEEN = 0.5;

/** How strongly the weight answers to chi-square: d ln χ² / d ln β is about a quarter. */
const ANSWER = 3;

/** Weight over the noise of the gradient, per σ of the profile in pixels. */
const NOISE_WEIGHT = 3;

/** Chi-square over the least so far that shows a step size out of bounds. */
const BLOWN = 5;

/** Looks in a row that chi-square must be at its goal with the weight unchanged. */
const HELD_LOOKS = 4;

/** Least weight in search of a chi-square, over the first: below it maps are made of noise. */
const LEAST_WEIGHT = 0.1;

/** Looks at the least weight after which a chi-square that is still too large is out of reach. */
const HOPELESS_LOOKS = 3;

/**
 * The positive image of least total variation for its chi-square, step by step: a primal-dual splitting
 * (Condat 2013, J. Optim. Theory Appl. 158, 460; Vũ 2013; after Chambolle & Pock 2011, J. Math.
 * Imaging Vis. 40, 120) whose primal steps are taken in a metric that is diagonal in frequency: the
 * operator's own response, exp(−(2πkσ)²)/k, plus the Laplacian. The variation is the root of half the
 * sum of squares of the four differences around each corner of four pixels, which is the same in a mirror and
 * after a quarter turn: forward differences alone would move features along the diagonal. Positivity is
 * dual, too. Two calls of the operator a step.
 *
 * @param problem Operator, data, start.
 * @param options Goal or weight, tolerances.
 * @returns A generator of states, the last of which is the solution; it throws `NotConverged` with
 * the last state when iterations run out or chi-square cannot be reached.
 *
 * @example A constant is what least variation makes of two equal halves
 * ```ts
 * import { variationSteps } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const identity = (x: Float64Array, into: Float64Array = new Float64Array(x.length)) => {
 *   into.set(x);
 *   return into;
 * };
 * const flux = Float64Array.from({ length: 49 }, (_, k) => 2 + (k % 2 === 0 ? 0.1 : -0.1));
 * let last;
 * for (
 *   const state of variationSteps({
 *     operator: { image_size: 49, sample_count: 49, forward: identity, adjoint: identity },
 *     samples: { flux, error: flux.map(() => 0.1) },
 *     pixels: 7,
 *     level: 2,
 *     profile_pixels: 0.1,
 *     start: flux,
 *   }, { weight: 100, max_iterations: 2000, settled: 1e-6 })
 * ) last = state;
 * assertAlmostEquals(last?.image[24] ?? NaN, 2, 0.01);
 * ```
 */
export function* variationSteps(
  problem: VariationProblem,
  options: VariationOptions = {},
): Generator<VariationState, void, void> {
  const { samples, pixels, level } = problem;
  const { reduced_chi_square: goal = null, weight: wished = "noise", settled = 0.005 } = options;
  const { chi_square_tolerance = 5e-3, max_iterations = 400 } = options;
  const weight = samples.error.map((e) => e < Infinity ? 1 / (e * e) : 0);
  const used = weight.reduce((n, w) => w > 0 ? n + 1 : n, 0);
  const operator = problem.operator.sparing?.(weight) ?? problem.operator;
  const size = operator.image_size, count = operator.sample_count;

  // The image in units of the level, g.
  let calls = 0;
  const scratch = new Float64Array(size);
  const forward = (g: Float64Array, into: Float64Array) => {
    calls++;
    for (let i = 0; i < size; i++) scratch[i] = level * g[i]!;
    return operator.forward(scratch, into);
  };
  const residual = new Float64Array(count), slope = new Float64Array(size);
  const pull = (model: Float64Array) => {
    calls++;
    let chi = 0;
    for (let k = 0; k < count; k++) {
      const r = weight[k]! > 0 ? model[k]! - samples.flux[k]! : 0;
      residual[k] = level * weight[k]! * r;
      chi += weight[k]! * r * r;
    }
    operator.adjoint(residual, slope);
    return chi;
  };

  /** Noise of the gradient with respect to the middle pixel, held down over the profile's width. */
  const noiseWeight = () => {
    const middle = new Float64Array(size);
    middle[(size - 1) / 2] = 1;
    const column = forward(middle, new Float64Array(count));
    const variance = column.reduce((sum, c, k) => sum + weight[k]! * c * c, 0);
    return NOISE_WEIGHT * Math.sqrt(variance) * problem.profile_pixels;
  };

  const metric = fourierMetric(pixels);
  const shape = { size: metric.size, pixels, profile_pixels: problem.profile_pixels };
  const { seen, bend } = symbols(shape);
  let bound = knownBound(
    problem.operator,
    { weight, level, blur: problem.profile_pixels },
    () =>
      largestRatio({
        normal: (v, into) => {
          const model = forward(v, new Float64Array(count));
          for (let k = 0; k < count; k++) residual[k] = level * weight[k]! * model[k]!;
          calls++;
          operator.adjoint(residual, into);
        },
        solve: (v) => metric.solve(v, seen),
        start: problem.start,
      }),
  );

  let g = problem.start.map((f) => f / level);
  const model = forward(g, new Float64Array(count)).slice();
  const around = new Float64Array(EDGES * size), below = new Float64Array(size);
  const ahead = new Float64Array(size);
  const symbol = new Float64Array(seen.length);
  let held = 0;
  let stride = FIRST_DUAL, kept = g, misses: number[] = [];
  let beta = typeof wished === "number" ? wished : noiseWeight();
  const least_weight = LEAST_WEIGHT * beta;
  let least = Infinity;
  for (let iterations = 0;; iterations++) {
    let chi_square = pull(model);
    if (!(chi_square < BLOWN * (least + used))) {
      // The power iteration stopped short of the largest ratio: take shorter steps from the last look.
      bound *= 2;
      g = kept.slice();
      forward(g, model);
      for (const variable of [around, below]) variable.fill(0);
      chi_square = pull(model);
    }
    least = Math.min(least, chi_square);
    if (iterations % LOOK === 0) {
      const change = iterations === 0 ? Infinity : distance(g, kept);
      const near = goal !== null &&
        Math.abs(chi_square / (goal * used) - 1) <= chi_square_tolerance;
      held = near ? held + 1 : 0;
      const reached = goal === null || held >= HELD_LOOKS;
      const state: VariationState = {
        image: g.map((x) => level * Math.max(0, x)),
        model: model.slice(),
        reduced_chi_square: chi_square / used,
        weight: beta,
        variation: variationOf(g, pixels),
        change,
        iterations,
        operator_calls: calls,
        converged: reached && change <= settled,
      };
      yield state;
      if (state.converged) return;
      const miss = goal === null ? 0 : state.reduced_chi_square / goal - 1;
      misses = miss > chi_square_tolerance && beta <= least_weight ? [...misses, miss] : [];
      const hopeless = beta <= least_weight && misses.length > HOPELESS_LOOKS;
      if (iterations >= max_iterations || hopeless) throw unfinished(state, goal);
      // Chi-square lags behind the weight: near the goal the weight stays, to see whether it holds.
      if (goal !== null && iterations > 0 && !near) {
        const factor = Math.pow(goal * used / chi_square, ANSWER);
        beta = Math.max(least_weight, beta * Math.min(1.5, Math.max(0.6, factor)));
        stride = Math.max(stride, RESUMED_DUAL);
      }
      kept = g;
    }

    stride = Math.max(LAST_DUAL, stride * DUAL_DECAY);
    const dual = stride * beta;
    for (let i = 0; i < symbol.length; i++) {
      symbol[i] = 0.5 * bound * seen[i]! + dual * (bend[i]! + POSITIVITY);
    }
    addDivergence(slope, { around, below, pixels });
    const step = metric.solve(slope, symbol);
    const next = new Float64Array(size);
    for (let i = 0; i < size; i++) {
      next[i] = g[i]! - step[i]!;
      ahead[i] = next[i]! - step[i]!;
    }
    climbDual(ahead, { around, below, pixels, beta, dual });
    g = next;
    forward(g, model);
  }
}

/** Response of the operator in frequency, up to a factor, and minus the Laplacian. */
function symbols(
  { size, pixels, profile_pixels }: {
    readonly size: number;
    readonly pixels: number;
    readonly profile_pixels: number;
  },
): { seen: Float64Array; bend: Float64Array } {
  const seen = new Float64Array(size * size), bend = new Float64Array(size * size);
  for (let r = 0; r < size; r++) {
    for (let c = 0; c < size; c++) {
      const ky = Math.min(r, size - r) / size, kx = Math.min(c, size - c) / size;
      const k = Math.hypot(kx, ky);
      const blurred = Math.exp(-((2 * Math.PI * k * profile_pixels) ** 2));
      seen[r * size + c] = blurred / (k + 0.5 / pixels) + BETWEEN;
      bend[r * size + c] = 4 * Math.sin(Math.PI * kx) ** 2 + 4 * Math.sin(Math.PI * ky) ** 2;
    }
  }
  return { seen, bend };
}

/** Differences around a corner: along its two rows, then along its two columns. */
const EDGES = 4;

interface Dual {
  /** Duals of the four differences around the corner after each pixel, over √2; zero in the last row and column. */
  readonly around: Float64Array;
  /** Dual of positivity, not positive. */
  readonly below: Float64Array;
  readonly pixels: number;
  readonly beta: number;
  readonly dual: number;
}

/** slope += the transpose of (differences around corners, identity) on the dual variables. */
function addDivergence(
  slope: Float64Array,
  { around, below, pixels }: Omit<Dual, "beta" | "dual">,
): void {
  for (let k = 0; k < slope.length; k++) slope[k] = slope[k]! + below[k]!;
  for (let r = 0; r + 1 < pixels; r++) {
    for (let c = 0; c + 1 < pixels; c++) {
      const k = r * pixels + c, e = EDGES * k;
      const upper = Math.SQRT1_2 * around[e]!, lower = Math.SQRT1_2 * around[e + 1]!;
      const left = Math.SQRT1_2 * around[e + 2]!, right = Math.SQRT1_2 * around[e + 3]!;
      slope[k] = slope[k]! - upper - left;
      slope[k + 1] = slope[k + 1]! + upper - right;
      slope[k + pixels] = slope[k + pixels]! + left - lower;
      slope[k + pixels + 1] = slope[k + pixels + 1]! + lower + right;
    }
  }
}

function climbDual(ahead: Float64Array, { around, below, pixels, beta, dual }: Dual): void {
  const factor = Math.SQRT1_2 * dual;
  for (let k = 0; k < ahead.length; k++) {
    below[k] = Math.min(0, below[k]! + POSITIVITY * dual * ahead[k]!);
  }
  for (let r = 0; r + 1 < pixels; r++) {
    for (let c = 0; c + 1 < pixels; c++) {
      const k = r * pixels + c, e = EDGES * k;
      const f = ahead[k]!, fx = ahead[k + 1]!, fy = ahead[k + pixels]!;
      const fxy = ahead[k + pixels + 1]!;
      const upper = around[e]! + factor * (fx - f), lower = around[e + 1]! + factor * (fxy - fy);
      const left = around[e + 2]! + factor * (fy - f), right = around[e + 3]! + factor * (fxy - fx);
      const length = Math.sqrt(upper * upper + lower * lower + left * left + right * right);
      const shrink = length > beta ? beta / length : 1;
      around[e] = upper * shrink;
      around[e + 1] = lower * shrink;
      around[e + 2] = left * shrink;
      around[e + 3] = right * shrink;
    }
  }
}

function variationOf(g: Float64Array, pixels: number): number {
  let sum = 0;
  for (let r = 0; r + 1 < pixels; r++) {
    for (let c = 0; c + 1 < pixels; c++) {
      const k = r * pixels + c;
      const f = g[k]!, fx = g[k + 1]!, fy = g[k + pixels]!, fxy = g[k + pixels + 1]!;
      sum += Math.sqrt(
        0.5 * ((fx - f) ** 2 + (fxy - fy) ** 2 + (fy - f) ** 2 + (fxy - fx) ** 2),
      );
    }
  }
  return sum;
}

function distance(a: Float64Array, b: Float64Array): number {
  let apart = 0, size = 0;
  for (let i = 0; i < a.length; i++) {
    apart += (a[i]! - b[i]!) ** 2;
    size += a[i]! * a[i]!;
  }
  return size > 0 ? Math.sqrt(apart / size) : 0;
}

function unfinished(state: VariationState, goal: number | null): NotConverged<VariationState> {
  const wanted = goal === null ? "" : ` for ${goal}`;
  return new NotConverged(
    `Cannot finish total-variation map: after ${state.iterations} iterations reduced chi-square is ` +
      `${state.reduced_chi_square.toPrecision(5)}${wanted} and the map still changes by ` +
      `${(100 * state.change).toPrecision(2)} % in ${LOOK} iterations; allow more iterations` +
      (goal === null ? "" : ", or set map.reduced_chi_square higher"),
    state,
  );
}
