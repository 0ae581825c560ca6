/**
 * Solves a small symmetric positive system by Cholesky, for inner loops.
 *
 * @param matrix n × n, row-major; its lower triangle is read and overwritten by the factor.
 * @param right n values; overwritten by the solution.
 * @param n Size.
 * @returns False when the matrix is singular (pivots are compared with 1e-13: scale it to about 1).
 */
export function solveInPlace(matrix: Float64Array, right: Float64Array, n: number): boolean {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i * n + j]!;
      for (let k = 0; k < j; k++) sum -= matrix[i * n + k]! * matrix[j * n + k]!;
      if (i === j) {
        if (!(sum > 1e-13)) return false;
        matrix[i * n + i] = Math.sqrt(sum);
      } else {
        matrix[i * n + j] = sum / matrix[j * n + j]!;
      }
    }
  }
  for (let i = 0; i < n; i++) {
    let sum = right[i]!;
    for (let k = 0; k < i; k++) sum -= matrix[i * n + k]! * right[k]!;
    right[i] = sum / matrix[i * n + i]!;
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = right[i]!;
    for (let k = i + 1; k < n; k++) sum -= matrix[k * n + i]! * right[k]!;
    right[i] = sum / matrix[i * n + i]!;
  }
  return true;
}

/**
 * Inverse of a matrix from its Cholesky factor, as {@linkcode solveInPlace} leaves it.
 *
 * @param factor n × n, row-major, lower triangle.
 * @param n Size.
 * @returns n × n, row-major.
 */
export function inverseFromFactor(factor: Float64Array, n: number): Float64Array {
  const inverse = new Float64Array(n * n);
  const column = new Float64Array(n);
  for (let c = 0; c < n; c++) {
    for (let i = 0; i < n; i++) {
      let sum = i === c ? 1 : 0;
      for (let k = 0; k < i; k++) sum -= factor[i * n + k]! * column[k]!;
      column[i] = sum / factor[i * n + i]!;
    }
    for (let i = n - 1; i >= 0; i--) {
      let sum = column[i]!;
      for (let k = i + 1; k < n; k++) sum -= factor[k * n + i]! * column[k]!;
      column[i] = sum / factor[i * n + i]!;
    }
    for (let i = 0; i < n; i++) inverse[i * n + c] = column[i]!;
  }
  return inverse;
}
