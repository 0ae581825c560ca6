import { Matrix, SingularValueDecomposition } from "ml-matrix";

/** Covariance of the free parameters, (RᵀR)⁻¹, and how many of them are determined. */
export function fitCovariance(
  triangle: Matrix,
  free: readonly number[],
): { covariance: Matrix; rank: number } {
  const k = triangle.columns;
  const covariance = Matrix.zeros(k, k);
  if (free.length === 0) return { covariance, rank: 0 };
  const columns = triangle.subMatrixColumn([...free]);
  const lengths = free.map((_, i) => columns.getColumnVector(i).norm() || 1);
  const svd = new SingularValueDecomposition(columns.divRowVector(lengths), {
    autoTranspose: true,
  });
  const singular = svd.diagonal;
  const right = svd.rightSingularVectors;
  // Columns from differences carry errors of some 1e-8: a smaller singular value is one of those.
  const rank = singular.filter((s) => s > 1e-8 * singular[0]!).length;
  const undetermined = free.map((_, i) =>
    singular.some((_s, s) => s >= rank && Math.abs(right.get(i, s)) > 1e-6)
  );
  free.forEach((a, i) =>
    free.forEach((b, j) => {
      let sum = 0;
      for (let s = 0; s < rank; s++) {
        sum += right.get(i, s) * right.get(j, s) / (singular[s]! * singular[s]!);
      }
      const infinite = i === j && undetermined[i];
      covariance.set(a, b, infinite ? Infinity : sum / (lengths[i]! * lengths[j]!));
    })
  );
  return { covariance, rank };
}
