import type { Sampling } from "../trail/mod.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Samples } from "./map_fit.ts";

/** A problem in which every exposure's linear baseline is free. */
export interface BaselineProblem {
  /** The operator followed by taking each exposure's fitted baseline out. */
  readonly operator: LinearOperator;
  /** The data without their fitted baselines, same errors. */
  readonly samples: Samples;
  /** Takes the fitted baseline out of any samples. */
  readonly without: (values: Float64Array) => Float64Array;
}

/**
 * Frees a straight baseline per exposure: a continuum that is a little off in level or slope then
 * neither adds to chi-square nor bends the map. Both data and model lose the weighted least-squares
 * line that fits them, which gives the same minimum as fitting the lines along with the map.
 *
 * @param operator Operator from image to samples.
 * @param options Sampling and data, with the errors that weigh the fit.
 * @returns The projected problem.
 *
 * @example
 * ```ts
 * import { freeBaselines } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const identity = (x: Float64Array, into: Float64Array = new Float64Array(x.length)) => {
 *   into.set(x);
 *   return into;
 * };
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 3),
 *   velocity_kms: Float64Array.of(-10, 0, 10),
 *   pixel_kms: Float64Array.of(10, 10, 10),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const { samples } = freeBaselines(
 *   { image_size: 3, sample_count: 3, forward: identity, adjoint: identity },
 *   { sampling, samples: { flux: Float64Array.of(1, 2, 3), error: Float64Array.of(1, 1, 1) } },
 * );
 * assertAlmostEquals(samples.flux[2] ?? NaN, 0, 1e-12);
 * ```
 */
export function freeBaselines(
  operator: LinearOperator,
  options: { readonly sampling: Sampling; readonly samples: Samples },
): BaselineProblem {
  const { sampling, samples } = options;
  const lines = exposureLines(sampling, samples.error);

  // P = 1 − B (Bᵀ W B)⁻¹ Bᵀ W with the columns of B orthonormal in W.
  const take = (values: Float64Array, transposed: boolean) => {
    for (const { from, to, level, slope, weight } of lines) {
      let a = 0, b = 0;
      for (let k = from; k < to; k++) {
        const v = transposed ? values[k]! : weight[k - from]! * values[k]!;
        a += level * v;
        b += slope[k - from]! * v;
      }
      for (let k = from; k < to; k++) {
        const fitted = a * level + b * slope[k - from]!;
        values[k] = values[k]! - (transposed ? weight[k - from]! * fitted : fitted);
      }
    }
    return values;
  };
  const scratch = new Float64Array(operator.sample_count);
  const projected = (inner: LinearOperator): LinearOperator => ({
    image_size: operator.image_size,
    sample_count: operator.sample_count,
    forward: (image, into) => take(inner.forward(image, into), false),
    adjoint: (data, into) => {
      scratch.set(data);
      return inner.adjoint(take(scratch, true), into);
    },
  });
  return {
    operator: {
      ...projected(operator),
      sparing: (weight) => projected(operator.sparing?.(weight) ?? operator),
    },
    samples: { flux: take(masked(samples), false), error: samples.error },
    without: (values) => take(values.slice(), false),
  };
}

interface ExposureLine {
  readonly from: number;
  readonly to: number;
  /** Value of the constant that is of unit length in the weights. */
  readonly level: number;
  /** The straight line that is orthogonal to it and of unit length. */
  readonly slope: Float64Array;
  readonly weight: Float64Array;
}

function exposureLines(sampling: Sampling, error: Float64Array): ExposureLine[] {
  const lines: ExposureLine[] = [];
  for (let i = 0; i < sampling.count; i++) {
    const from = sampling.start[i]!, to = sampling.start[i + 1]!;
    const weight = error.slice(from, to).map((e) => 1 / (e * e));
    const total = weight.reduce((a, b) => a + b, 0);
    if (!(total > 0)) continue;
    const v = sampling.velocity_kms.subarray(from, to);
    const mean = v.reduce((sum, x, k) => sum + weight[k]! * x, 0) / total;
    const square = v.reduce((sum, x, k) => sum + weight[k]! * (x - mean) ** 2, 0);
    const unit = square > 0 ? 1 / Math.sqrt(square) : 0;
    lines.push({
      from,
      to,
      level: 1 / Math.sqrt(total),
      slope: v.map((x) => (x - mean) * unit),
      weight,
    });
  }
  return lines;
}

/** Masked samples may hold anything; with zero weight they must at least be numbers. */
function masked(samples: Samples): Float64Array {
  return samples.flux.map((f, k) => samples.error[k] === Infinity ? 0 : f);
}
