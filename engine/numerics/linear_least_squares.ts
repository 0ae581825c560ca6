import { Matrix, SingularValueDecomposition } from "ml-matrix";
import { InputError } from "../errors.ts";
import type { DenseMatrix } from "./dense_matrix.ts";
import { reduceModel } from "./reduce_model.ts";
import { requireSameLength } from "./require.ts";

/** Solution of a linear least-squares problem. */
export interface LinearFit {
  /** The K parameters. */
  readonly parameters: Float64Array;
  /** Their covariance, K × K, from the given errors: not rescaled by the scatter found. */
  readonly covariance: DenseMatrix;
  /** Sum of squared residuals over errors. */
  readonly chi_square: number;
  /** Number of independent columns; below K the smallest solution was taken. */
  readonly rank: number;
  /** How many samples counted. */
  readonly sample_count: number;
}

/**
 * Weighted linear least squares by singular values: minimises Σ ((data − design·p)/error)². Of equally
 * good solutions it takes the smallest one (columns scaled to equal length), and says so by the rank.
 *
 * @param design Design matrix, N rows (samples) × K columns (parameters).
 * @param data N samples.
 * @param options Options.
 * @param options.error N standard deviations, positive; infinite where masked.
 * @default error 1 for each sample
 * @returns Parameters, covariance and chi-square.
 * @throws {InputError} When sizes differ, an error is not positive, or a number is not finite.
 *
 * @example A straight line
 * ```ts
 * import { solveLeastSquares } from "@millrace/millrace/numerics";
 * import { Matrix } from "ml-matrix";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const design = new Matrix([[1, 0], [1, 1], [1, 2]]);
 * const { parameters } = solveLeastSquares(design, Float64Array.of(1, 3, 5));
 * assertAlmostEquals(parameters[0]!, 1, 1e-14);
 * assertAlmostEquals(parameters[1]!, 2, 1e-14);
 * ```
 */
export function solveLeastSquares(
  design: DenseMatrix,
  data: ArrayLike<number>,
  { error }: { error?: ArrayLike<number> } = {},
): LinearFit {
  const action = "solve least squares";
  requireSameLength(action, "rows and samples", design.rows, data.length);
  if (error) requireSameLength(action, "samples and errors", data.length, error.length);

  const columns = design.columns;
  const rows: number[] = [];
  const target: number[] = [];
  design.to2DArray().forEach((designRow, i) => {
    const sigma = error ? error[i]! : 1;
    if (!(sigma > 0)) {
      throw new InputError({ action, rule: "errors must be positive", value: sigma });
    }
    if (sigma === Infinity) return;
    const row = designRow.map((value) => value / sigma);
    const sample = data[i]! / sigma;
    if (!Number.isFinite(sample) || !row.every(Number.isFinite)) {
      throw new InputError({
        action,
        rule: "unmasked samples and their rows must be finite",
        value: data[i],
        key: `sample ${i}`,
      });
    }
    rows.push(...row);
    target.push(sample);
  });
  if (target.length === 0 || columns === 0) {
    throw new InputError({
      action,
      rule: "there must be an unmasked sample and a parameter",
      value: [target.length, columns],
    });
  }

  const reduced = reduceModel(Float64Array.from(rows), Float64Array.from(target), columns);
  const triangle = reduced.triangle;
  const lengths = Array.from(
    { length: columns },
    (_, j) => triangle.getColumnVector(j).norm() || 1,
  );
  const svd = new SingularValueDecomposition(triangle.clone().divRowVector(lengths));
  const singular = svd.diagonal;
  const least = singular[0]! * Number.EPSILON * Math.max(target.length, columns);
  const rank = singular.filter((value) => value > least).length;
  const left = svd.leftSingularVectors;
  const right = svd.rightSingularVectors;

  const parameters = new Float64Array(columns);
  const covariance = Matrix.zeros(columns, columns);
  for (let s = 0; s < rank; s++) {
    let along = 0;
    for (let i = 0; i < columns; i++) along += left.get(i, s) * reduced.target[i]!;
    for (let j = 0; j < columns; j++) {
      const v = right.get(j, s) / (lengths[j]! * singular[s]!);
      parameters[j]! += v * along;
      for (let k = 0; k < columns; k++) {
        const w = right.get(k, s) / (lengths[k]! * singular[s]!);
        covariance.set(j, k, covariance.get(j, k) + v * w);
      }
    }
  }
  const chiSquare = target.reduce((sum, sample, i) => {
    const model = parameters.reduce((total, value, j) => total + value * rows[i * columns + j]!, 0);
    return sum + (sample - model) ** 2;
  }, 0);
  return { parameters, covariance, chi_square: chiSquare, rank, sample_count: target.length };
}
