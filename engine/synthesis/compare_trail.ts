import { InputError } from "../errors.ts";
import type { Trail } from "../trail/mod.ts";

/** How a predicted trail stands beside an observed one. */
export interface TrailComparison {
  /** Observed less predicted, in standard deviations; 0 where masked. Laid out as the trail's samples. */
  readonly residual_sigma: Float64Array;
  /** Sum of their squares. */
  readonly chi_square: number;
  /** Number of samples that are not masked. */
  readonly sample_count: number;
}

/**
 * Compares a prediction with a trail on its native samples, where the noise is uncorrelated.
 *
 * @param trail The observed trail.
 * @param predicted Normalised flux minus one at each sample, as {@linkcode synthesize} gives it.
 * @returns Residuals and χ².
 * @throws {InputError} When the prediction has another number of samples.
 *
 * @example
 * ```ts
 * import { compareTrail } from "@millrace/millrace/synthesis";
 * import { assertEquals } from "@std/assert";
 *
 * const trail = { flux: Float64Array.of(1, 2, 0), error: Float64Array.of(0.5, 0.5, Infinity) };
 * const { chi_square, sample_count } = compareTrail(trail, Float64Array.of(1, 1, 5));
 * assertEquals([chi_square, sample_count], [4, 2]);
 * ```
 */
export function compareTrail(
  trail: Pick<Trail, "flux" | "error">,
  predicted: Float64Array,
): TrailComparison {
  const { flux, error } = trail;
  if (predicted.length !== flux.length) {
    throw new InputError({
      action: "compare model with trail",
      rule: `the prediction must have the trail's ${flux.length} samples`,
      value: predicted.length,
    });
  }
  const residual_sigma = new Float64Array(flux.length);
  let chi_square = 0, sample_count = 0;
  for (let n = 0; n < flux.length; n++) {
    if (!(error[n]! < Infinity)) continue;
    residual_sigma[n] = (flux[n]! - predicted[n]!) / error[n]!;
    chi_square += residual_sigma[n]! ** 2;
    sample_count++;
  }
  return { residual_sigma, chi_square, sample_count };
}
