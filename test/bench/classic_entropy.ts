// The classic search of Skilling & Bryan (1984): three directions, no memory, a flat start. It is here
// to be compared with; the engine's solver is entropy_solver.ts.
import {
  type LinearOperator,
  type Samples,
  type SubspaceModel,
  subspaceStep,
} from "@millrace/millrace/tomography";

export interface ClassicResult {
  readonly image: Float64Array;
  readonly reduced_chi_square: number;
  readonly misalignment: number;
  readonly operator_calls: number;
}

export function classicEntropy(
  operator: LinearOperator,
  samples: Samples,
  level: number,
): ClassicResult {
  const size = operator.image_size, count = operator.sample_count;
  const weight = samples.error.map((e) => 1 / (e * e));
  let image = new Float64Array(size).fill(level), calls = 0;
  const forward = (x: Float64Array) => {
    calls++;
    return operator.forward(x).slice();
  };
  const adjoint = (x: Float64Array) => {
    calls++;
    return operator.adjoint(x).slice();
  };
  let model = forward(image);
  for (let iteration = 0; iteration < 500; iteration++) {
    let chi_square = 0;
    const residual = model.map((m, k) => {
      const r = m - samples.flux[k]!;
      chi_square += weight[k]! * r * r;
      return 2 * weight[k]! * r;
    });
    const pull = adjoint(residual);
    const slope = image.map((f) => -Math.log(f / level));
    const metricDot = (a: Float64Array, b: Float64Array) =>
      a.reduce((sum, x, i) => sum + image[i]! * x * b[i]!, 0);
    const ss = metricDot(slope, slope), cc = metricDot(pull, pull), sc = metricDot(slope, pull);
    const misalignment = ss > 0 ? 1 - sc / Math.sqrt(ss * cc) : 1;
    const reduced_chi_square = chi_square / count;
    if (Math.abs(reduced_chi_square - 1) < 1e-3 && misalignment < 0.01) {
      return { image, reduced_chi_square, misalignment, operator_calls: calls };
    }
    const ns = Math.sqrt(ss) || 1, nc = Math.sqrt(cc);
    const first = image.map((f, i) => f * slope[i]!), second = image.map((f, i) => f * pull[i]!);
    const seen = [forward(first), forward(second)];
    const curved = adjoint(
      seen[0]!.map((a, k) => 2 * weight[k]! * (a / ns - seen[1]![k]! / nc)),
    );
    const third = image.map((f, i) => f * curved[i]!);
    seen.push(forward(third));
    const steps = [first, second, third].map((step, d) => {
      const length = Math.sqrt(step.reduce((sum, x, i) => sum + x * x / image[i]!, 0)) || 1;
      seen[d] = seen[d]!.map((x) => x / length);
      return step.map((x) => x / length);
    });
    const model3: SubspaceModel = {
      metric: pairs(steps, (a, b) => a.reduce((sum, x, i) => sum + x * b[i]! / image[i]!, 0)),
      curvature: pairs(
        seen,
        (a, b) => a.reduce((sum, x, k) => sum + 2 * weight[k]! * x * b[k]!, 0),
      ),
      entropy_slope: Float64Array.from(
        steps,
        (s) => s.reduce((sum, x, i) => sum + x * slope[i]!, 0),
      ),
      chi_slope: Float64Array.from(steps, (s) => s.reduce((sum, x, i) => sum + x * pull[i]!, 0)),
      chi_square,
    };
    const { coefficients } = subspaceStep(model3, {
      target: count,
      multiplier: null,
      longest: 0.3 * image.reduce((a, b) => a + b, 0),
    });
    let held = false;
    const next = image.map((f, i) => {
      const g = f + steps.reduce((sum, s, d) => sum + coefficients[d]! * s[i]!, 0);
      if (g < 0.1 * f) held = true;
      return Math.max(g, 0.1 * f);
    });
    model = held
      ? forward(next)
      : model.map((m, k) => m + seen.reduce((sum, s, d) => sum + coefficients[d]! * s[k]!, 0));
    image = next;
  }
  throw new Error("the classic search did not end");
}

function pairs(
  vectors: readonly Float64Array[],
  dot: (a: Float64Array, b: Float64Array) => number,
): Float64Array {
  const n = vectors.length;
  return Float64Array.from(
    { length: n * n },
    (_, k) => dot(vectors[Math.floor(k / n)]!, vectors[k % n]!),
  );
}
