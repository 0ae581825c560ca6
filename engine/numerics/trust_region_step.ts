import { Matrix, SingularValueDecomposition } from "ml-matrix";
import type { Bounds } from "./bounds.ts";

/** The linear model of the residuals near a point, reduced to K rows: ‖triangle·p + target‖². */
export interface ReducedModel {
  /** R of the QR decomposition of the Jacobian, K × K. */
  readonly triangle: Matrix;
  /** First K values of Qᵀ·residuals. */
  readonly target: Float64Array;
}

/** A step within the trust region and the bounds. */
export interface TrustRegionStep {
  /** The step, K values. */
  readonly step: Float64Array;
  /** True when the region cut it short of the model's minimum. */
  readonly cut: boolean;
}

// Moré (1978), sections 5 and 6, in singular values: the step −V s/(s²+λ) Uᵀc with λ such that its
// length is the radius within 10 %. Zero singular values are left out, so that columns may depend on
// each other.
function freeStep(matrix: Matrix, target: Float64Array, radius: number) {
  const svd = new SingularValueDecomposition(matrix, { autoTranspose: true });
  const singular = svd.diagonal;
  const least = singular[0]! * Number.EPSILON * matrix.columns;
  const rank = singular.filter((s) => s > least).length;
  const along = Array.from({ length: rank }, (_, s) => {
    const left = svd.leftSingularVectors;
    return target.reduce((sum, value, i) => sum + left.get(i, s) * value, 0);
  });
  const lengthAt = (lambda: number) =>
    Math.hypot(...along.map((c, i) => c * singular[i]! / (singular[i]! ** 2 + lambda)));

  let lambda = 0;
  let length = lengthAt(0);
  for (let i = 0; i < 60 && length > 1.1 * radius; i++) {
    const slope = -along.reduce(
      (sum, c, s) => sum + (c * singular[s]!) ** 2 / (singular[s]! ** 2 + lambda) ** 3,
      0,
    ) / length;
    lambda -= (length - radius) / slope * length / radius;
    length = lengthAt(lambda);
  }
  const right = svd.rightSingularVectors;
  const step = Float64Array.from(
    { length: matrix.columns },
    (_, j) =>
      along.reduce(
        (sum, c, s) => sum - right.get(j, s) * c * singular[s]! / (singular[s]! ** 2 + lambda),
        0,
      ),
  );
  return { step, cut: lambda > 0 };
}

/**
 * Step that minimises the model within ‖scale·p‖ ≤ radius and the bounds. The parameter that the step
 * would carry over its bound first is set on it and the others solved again, and so on: one at a
 * time, so that each solution still lowers the model. Those on a bound that the gradient presses
 * against it stay there.
 */
export function trustRegionStep(
  model: ReducedModel,
  at: Float64Array,
  { scale, radius, bounds, gradient }: {
    scale: Float64Array;
    radius: number;
    bounds: Bounds;
    gradient: Float64Array;
  },
): TrustRegionStep {
  const k = at.length;
  const step = new Float64Array(k);
  let free = Array.from({ length: k }, (_, j) => j).filter((j) =>
    !(gradient[j]! >= 0 && at[j] === bounds.lower[j]) &&
    !(gradient[j]! <= 0 && at[j] === bounds.upper[j])
  );
  let cut = false;
  const target = model.target.slice();
  while (free.length > 0) {
    const columns = model.triangle.subMatrixColumn(free).divRowVector(free.map((j) => scale[j]!));
    const solved = freeStep(columns, target, radius);
    cut = solved.cut;
    free.forEach((j, i) => step[j] = solved.step[i]! / scale[j]!);
    const boundOf = (j: number) => (step[j]! < 0 ? bounds.lower[j]! : bounds.upper[j]!) - at[j]!;
    const over = free.filter((j) => Math.abs(step[j]!) > Math.abs(boundOf(j)));
    if (over.length === 0) break;
    const share = (j: number) => boundOf(j) / step[j]!;
    const first = over.reduce((a, b) => share(b) < share(a) ? b : a);
    step[first] = boundOf(first);
    for (let i = 0; i < k; i++) target[i]! += model.triangle.get(i, first) * step[first]!;
    free = free.filter((j) => j !== first);
  }
  return { step, cut };
}
