import { InputError } from "../errors.ts";
import { type Bounds, readBounds } from "./bounds.ts";
import { fitCovariance } from "./fit_covariance.ts";
import type { LeastSquaresFit, MinimiseOptions } from "./least_squares_fit.ts";
import { numericJacobian } from "./numeric_jacobian.ts";
import { reduceModel } from "./reduce_model.ts";
import { trustRegionStep } from "./trust_region_step.ts";

type Residuals = (parameters: Float64Array) => Float64Array;

function sumOfSquares(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i]! * values[i]!;
  return sum;
}

function onBounds(at: Float64Array, bounds: Bounds): ("lower" | "upper" | null)[] {
  return Array.from(at, (x, j) => {
    if (x === bounds.lower[j]) return "lower";
    return x === bounds.upper[j] ? "upper" : null;
  });
}

/**
 * Non-linear least squares by the Levenberg–Marquardt method as a scaled trust region (Moré 1978, in
 * "Numerical Analysis", LNM 630, 105), with bounds by an active set: minimises
 * Σ r_i(p)². It finds the minimum near the start, which need not be the lowest one. A point where a
 * residual is not finite is avoided.
 *
 * @param residuals Gives the N residuals, (data − model)/error, for K parameters; it must not keep or
 * change its argument.
 * @param start K starting values; not changed.
 * @param options Bounds, Jacobian and when to stop.
 * @returns The fit; look at `converged` and `at_bound`.
 * @throws {InputError} When the start is out of bounds or its residuals are not finite.
 *
 * @example
 * ```ts
 * import { minimise } from "@millrace/millrace/numerics";
 * import { assert, assertAlmostEquals } from "@std/assert";
 *
 * // Rosenbrock's valley.
 * const fit = minimise(([x, y]) => Float64Array.of(10 * (y! - x! ** 2), 1 - x!), Float64Array.of(-1.2, 1));
 * assert(fit.converged);
 * assertAlmostEquals(fit.parameters[0]!, 1, 1e-8);
 * ```
 */
export function minimise(
  residuals: (parameters: Float64Array) => Float64Array,
  start: Float64Array,
  options: MinimiseOptions = {},
): LeastSquaresFit {
  const { tolerance = 1e-10, max_iterations = 200 } = options;
  const k = start.length;
  const bounds = readBounds(start, options.lower, options.upper);
  let evaluations = 0;
  const evaluate: Residuals = (at) => {
    evaluations++;
    return residuals(at.slice());
  };

  let at = start.slice();
  let current = evaluate(at);
  let chiSquare = sumOfSquares(current);
  if (!Number.isFinite(chiSquare) || k === 0) {
    throw new InputError({
      action: "minimise",
      rule: "there must be parameters, and finite residuals at their start",
      value: Array.from(start),
    });
  }
  const first = chiSquare;
  const typical = options.typical
    ? Float64Array.from(options.typical)
    : start.map((x) => Math.abs(x) || 1);
  const modelAt = (place: Float64Array, values: Float64Array) => {
    const jacobian = options.jacobian?.(place.slice()) ?? numericJacobian(evaluate, place, {
      residuals: values,
      typical,
      bounds,
      central: options.differences === "central",
    });
    return reduceModel(jacobian, values, k);
  };

  const scale = new Float64Array(k);
  let radius = 0;
  let iterations = 0;
  let converged = false;
  let model = modelAt(at, current);
  for (; iterations < max_iterations && !converged; iterations++) {
    if (iterations > 0) model = modelAt(at, current);
    const { triangle, target } = model;
    const lengths = Float64Array.from(
      { length: k },
      (_, j) => triangle.getColumnVector(j).norm(),
    );
    const gradient = Float64Array.from(
      { length: k },
      (_, j) => target.reduce((sum, value, i) => sum + triangle.get(i, j) * value, 0),
    );
    for (let j = 0; j < k; j++) scale[j] = Math.max(scale[j]!, lengths[j]!) || 1;
    const size = (values: Float64Array) =>
      Math.sqrt(sumOfSquares(values.map((v, j) => v * scale[j]!)));
    if (iterations === 0) radius = 100 * size(at) || 100;

    // Cosine of the angle between residuals and the columns they may still be lowered along.
    const cosine = Math.max(
      ...gradient.map((g, j) => {
        const pressed = (g >= 0 && at[j] === bounds.lower[j]) ||
          (g <= 0 && at[j] === bounds.upper[j]);
        return pressed || g === 0 ? 0 : Math.abs(g) / (lengths[j]! * Math.sqrt(chiSquare));
      }),
    );
    if (!(cosine > Number.EPSILON)) {
      converged = true;
      break;
    }

    let accepted = false;
    while (!accepted && !converged) {
      const { step, cut } = trustRegionStep(model, at, { scale, radius, bounds, gradient });
      const next = at.map((x, j) =>
        Math.min(bounds.upper[j]!, Math.max(bounds.lower[j]!, x + step[j]!))
      );
      const modelled = target.map((value, i) =>
        value + step.reduce((sum, p, j) => sum + triangle.get(i, j) * p, 0)
      );
      const predicted = (sumOfSquares(target) - sumOfSquares(modelled)) / chiSquare;
      const there = evaluate(next);
      const value = sumOfSquares(there);
      const actual = Number.isFinite(value) ? 1 - value / chiSquare : -Infinity;
      const ratio = predicted > 0 ? actual / predicted : 0;
      const length = size(step);

      if (iterations === 0) radius = Math.min(radius, length);
      if (ratio <= 0.25) {
        const slope = step.reduce((sum, p, j) => sum + p * gradient[j]!, 0) / chiSquare;
        const fraction = actual >= 0 ? 0.5 : 0.5 * slope / (slope + 0.5 * actual);
        radius = (fraction > 0.1 ? Math.min(0.5, fraction) : 0.1) * Math.min(radius, 10 * length);
      } else if (!cut || ratio >= 0.75) {
        radius = 2 * length;
      }

      if (ratio >= 1e-4) {
        accepted = true;
        at = next;
        current = there;
        chiSquare = value;
      }
      const unmoved = Math.abs(actual) <= tolerance && predicted <= tolerance && ratio <= 2;
      const exhausted = !(radius > tolerance * size(at)) ||
        (predicted >= 0 && predicted <= Number.EPSILON);
      if (chiSquare <= first * Number.EPSILON ** 2) {
        converged = true;
      } else if (unmoved || exhausted) {
        // No step helps any more: the end, unless the gradient says that one should.
        converged = accepted || !cut || cosine < 1e-3 || chiSquare <= 1e-20 * first;
        if (!converged) break;
      }
    }
    if (!accepted && !converged) break;
  }

  const atBound = onBounds(at, bounds);
  const free = atBound.flatMap((bound, j) => bound === null ? [j] : []);
  const { covariance, rank } = fitCovariance(modelAt(at, current).triangle, free);
  return {
    parameters: at,
    covariance,
    chi_square: chiSquare,
    residuals: current,
    iterations,
    evaluations,
    converged,
    at_bound: atBound,
    rank,
  };
}
