import { EigenvalueDecomposition, Matrix } from "ml-matrix";

/** Quadratic models of entropy and chi-square in the span of K directions. */
export interface SubspaceModel {
  /** Inner products of the directions in the entropy's metric, K × K row-major. */
  readonly metric: Float64Array;
  /** Second derivative of chi-square along the directions, K × K row-major. */
  readonly curvature: Float64Array;
  /** Slope of the entropy along each direction. */
  readonly entropy_slope: Float64Array;
  /** Slope of chi-square along each direction. */
  readonly chi_slope: Float64Array;
  /** Chi-square where the directions start. */
  readonly chi_square: number;
}

/** What the control aims for. */
export interface SubspaceAim {
  /** Chi-square wanted in the end; null with a fixed multiplier. */
  readonly target: number | null;
  /** Fixed multiplier α of the objective χ² − α S; null with a target. */
  readonly multiplier: number | null;
  /** Longest step, squared, in the entropy's metric. */
  readonly longest: number;
}

/** The step chosen. */
export interface SubspaceStep {
  /** Coefficients of the K directions. */
  readonly coefficients: Float64Array;
  /** Multiplier α at which the step was taken. */
  readonly multiplier: number;
  /** Least chi-square that the model reaches in this subspace. */
  readonly least_chi_square: number;
}

/** Directions whose metric eigenvalue is below this fraction of the largest add nothing but noise. */
const DEPENDENT = 1e-10;

/** Share of the way to the subspace's least chi-square that one step may go. */
const BOLDNESS = 2 / 3;

/**
 * The control of Skilling & Bryan (1984, MNRAS 211, 111, section 3.7): metric and curvature are made
 * diagonal together; the multiplier is found for which chi-square moves as far towards its goal as
 * the subspace honestly allows; a penalty on distance keeps the step within the trust radius.
 *
 * @param model Quadratic models.
 * @param aim Goal or multiplier, and trust radius.
 * @returns Coefficients of the directions.
 *
 * @example One direction, chi-square (x − 1)², no entropy: the goal 0 is reached two thirds
 * ```ts
 * import { subspaceStep } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const step = subspaceStep({
 *   metric: Float64Array.of(1),
 *   curvature: Float64Array.of(2),
 *   entropy_slope: Float64Array.of(0),
 *   chi_slope: Float64Array.of(-2),
 *   chi_square: 1,
 * }, { target: 0, multiplier: null, longest: 100 });
 * assertAlmostEquals((1 - step.coefficients[0]!) ** 2, 1 / 3, 1e-6);
 * ```
 */
export function subspaceStep(model: SubspaceModel, aim: SubspaceAim): SubspaceStep {
  const { basis, gamma, s, c } = diagonalise(model);
  let least_chi_square = model.chi_square;
  for (let k = 0; k < gamma.length; k++) {
    if (gamma[k]! > 0) least_chi_square -= 0.5 * c[k]! ** 2 / gamma[k]!;
  }
  const goal = aim.target === null ? 0 : Math.max(
    aim.target,
    BOLDNESS * least_chi_square + (1 - BOLDNESS) * model.chi_square,
  );
  const at = (multiplier: number, penalty: number): Trial => {
    let chi = model.chi_square, length = 0;
    const x = gamma.map((g, k) => (multiplier * s[k]! - c[k]!) / (penalty + g + multiplier));
    x.forEach((step, k) => {
      chi += c[k]! * step + 0.5 * gamma[k]! * step * step;
      length += step * step;
    });
    return { x, chi, length, multiplier };
  };
  const best = (penalty: number): Trial => {
    if (aim.multiplier !== null) return at(aim.multiplier, penalty);
    // Chi-square grows with the multiplier: bisection in its logarithm around the curvature's scale.
    const scale = gamma.reduce((a, b) => Math.max(a, b), 1e-300);
    let low = Math.log(1e-14 * scale), high = Math.log(1e14 * scale);
    for (let i = 0; i < 50; i++) {
      const middle = 0.5 * (low + high);
      if (at(Math.exp(middle), penalty).chi > goal) high = middle;
      else low = middle;
    }
    return at(Math.exp(0.5 * (low + high)), penalty);
  };
  let trial = best(0);
  if (trial.length > aim.longest) {
    const scale = gamma.reduce((a, b) => Math.max(a, b), 1e-300);
    let low = Math.log(1e-12 * scale), high = Math.log(1e12 * scale);
    for (let i = 0; i < 30; i++) {
      const middle = 0.5 * (low + high);
      const shorter = best(Math.exp(middle));
      if (shorter.length > aim.longest) low = middle;
      else [high, trial] = [middle, shorter];
    }
  }
  const coefficients = Float64Array.from(
    { length: basis.rows },
    (_, i) => trial.x.reduce((sum, x, k) => sum + basis.get(i, k) * x, 0),
  );
  return { coefficients, multiplier: trial.multiplier, least_chi_square };
}

interface Trial {
  readonly x: number[];
  readonly chi: number;
  readonly length: number;
  readonly multiplier: number;
}

/** A basis in which the metric is one and the curvature diagonal. */
function diagonalise(model: SubspaceModel): {
  basis: Matrix;
  gamma: number[];
  s: number[];
  c: number[];
} {
  const { metric, curvature, entropy_slope, chi_slope } = model;
  const count = entropy_slope.length;
  const square = (values: Float64Array) => Matrix.from1DArray(count, count, values);
  const first = new EigenvalueDecomposition(square(metric), { assumeSymmetric: true });
  const values = first.realEigenvalues;
  const largest = values.reduce((a, b) => Math.max(a, b), 0);
  const kept = values.flatMap((value, k) => value > DEPENDENT * largest ? [k] : []);
  const scaled = first.eigenvectorMatrix.subMatrixColumn(kept);
  kept.forEach((k, j) => scaled.mulColumn(j, 1 / Math.sqrt(values[k]!)));
  const second = new EigenvalueDecomposition(
    scaled.transpose().mmul(square(curvature)).mmul(scaled),
    {
      assumeSymmetric: true,
    },
  );
  const basis = scaled.mmul(second.eigenvectorMatrix);
  const project = (slope: Float64Array) =>
    kept.map((_, k) => slope.reduce((sum, value, i) => sum + value * basis.get(i, k), 0));
  return {
    basis,
    gamma: second.realEigenvalues.map((g) => Math.max(0, g)),
    s: project(entropy_slope),
    c: project(chi_slope),
  };
}
