import { fcnnlsVector } from "ml-fcnnls";
import { InputError, WorkError } from "../errors.ts";
import type { DenseMatrix } from "./dense_matrix.ts";
import { reduceModel } from "./reduce_model.ts";
import { requireSameLength } from "./require.ts";

/**
 * Non-negative least squares: minimises ‖design·p − data‖² with every p ≥ 0 (active sets: Lawson & Hanson
 * 1974; Van Benthem & Keenan 2004, J. Chemometrics 18, 441). To weight, divide rows and data by the
 * errors. Columns are brought to equal length inside, so their units do not matter.
 *
 * @param design Design matrix, N rows (samples) × K columns (parameters).
 * @param data N samples.
 * @returns The K parameters.
 * @throws {InputError} When sizes differ or a number is not finite.
 * @throws {WorkError} When the active sets cycle.
 *
 * @example
 * ```ts
 * import { nonNegativeLeastSquares } from "@millrace/millrace/numerics";
 * import { Matrix } from "ml-matrix";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const solution = nonNegativeLeastSquares(new Matrix([[1, 0], [0, 1]]), [2, -3]);
 * assertAlmostEquals(solution[0]!, 2, 1e-12);
 * assertEquals(solution[1], 0);
 * ```
 */
export function nonNegativeLeastSquares(
  design: DenseMatrix,
  data: ArrayLike<number>,
): Float64Array {
  const action = "solve non-negative least squares";
  requireSameLength(action, "rows and samples", design.rows, data.length);
  const length = Math.sqrt(Array.from(data).reduce((sum, value) => sum + value * value, 0));
  const finite = Float64Array.from(design.to2DArray().flat());
  if (!Number.isFinite(length) || !finite.every(Number.isFinite)) {
    throw new InputError({ action, rule: "design and data must be finite" });
  }
  // The triangle of a QR decomposition has the same solution as the tall design.
  const { triangle, target } = reduceModel(finite, Float64Array.from(data), design.columns);
  const lengths = Array.from(
    { length: design.columns },
    (_, j) => triangle.getColumnVector(j).norm(),
  );
  // A column of zeros changes nothing, and its parameter is 0.
  const used = lengths.flatMap((norm, j) => norm > 0 ? [j] : []);
  const parameters = new Float64Array(design.columns);
  if (used.length === 0 || length === 0) return parameters;
  const unit = triangle.subMatrixColumn(used).divRowVector(used.map((j) => lengths[j]!));
  let solution: number[];
  try {
    solution = fcnnlsVector(unit, Array.from(target, (value) => value / length), {
      gradientTolerance: 1e-12,
      maxIterations: 10 * used.length + 30,
    }).K.to1DArray();
  } catch (cause) {
    const reason = `the active sets cycle among ${used.length} parameters`;
    throw Object.assign(new WorkError({ action, reason }), { cause });
  }
  used.forEach((j, i) => parameters[j] = Math.max(0, solution[i]!) * length / lengths[j]!);
  return parameters;
}
