import { Matrix } from "ml-matrix";
import type { ReducedModel } from "./trust_region_step.ts";

/**
 * The triangle of the QR decomposition of a tall Jacobian, and Qᵀ·residuals, by Householder
 * reflections on columns that are contiguous in memory: with thousands of rows and a few columns
 * this is about ten times faster than a matrix of rows.
 *
 * @param jacobian N × K row-major.
 * @param residuals N values.
 * @param k Number of columns, K.
 */
export function reduceModel(
  jacobian: Float64Array,
  residuals: Float64Array,
  k: number,
): ReducedModel {
  const n = residuals.length;
  const columns = Array.from({ length: k + 1 }, () => new Float64Array(Math.max(n, k + 1)));
  for (let j = 0; j < k; j++) {
    const column = columns[j]!;
    for (let i = 0, at = j; i < n; i++, at += k) column[i] = jacobian[at]!;
  }
  columns[k]!.set(residuals);
  for (let j = 0; j < k; j++) {
    const pivot = columns[j]!;
    let sum = 0;
    for (let i = j; i < pivot.length; i++) sum += pivot[i]! * pivot[i]!;
    if (sum === 0) continue;
    const head = pivot[j]!;
    const length = head > 0 ? -Math.sqrt(sum) : Math.sqrt(sum);
    // v = pivot − length·e_j, of squared norm 2 length (length − head).
    pivot[j] = head - length;
    const scale = 1 / (length * (length - head));
    for (let c = j + 1; c <= k; c++) {
      const column = columns[c]!;
      let along = 0;
      for (let i = j; i < column.length; i++) along += pivot[i]! * column[i]!;
      along *= scale;
      for (let i = j; i < column.length; i++) column[i]! -= along * pivot[i]!;
    }
    pivot[j] = length;
  }
  const triangle = Matrix.zeros(k, k);
  for (let i = 0; i < k; i++) {
    for (let j = i; j < k; j++) triangle.set(i, j, columns[j]![i]!);
  }
  return { triangle, target: columns[k]!.slice(0, k) };
}
