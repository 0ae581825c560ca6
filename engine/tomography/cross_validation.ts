import { InputError } from "../errors.ts";
import type { TrailSamples } from "./check_trail.ts";
import { blendProjector } from "./blend_projector.ts";
import { type InversionRecipe, makeInverter } from "./invert_trail.ts";

/** Options of {@linkcode crossValidate}. */
export interface CrossValidationOptions {
  /** The recipes to compare. */
  readonly recipes: readonly InversionRecipe[];
  /**
   * Number of parts that the exposures are left out in.
   *
   * @default {5}
   */
  readonly parts?: number;
  /**
   * Exposures in a block that is left out together: more than one, so that neighbours that share a
   * smear do not tell.
   *
   * @default {2}
   */
  readonly block?: number;
}

/** How well recipes predict what they did not see. */
export interface CrossValidation {
  /** Mean squared prediction error over the noise, one per recipe. */
  readonly predicted_chi_square: Float64Array;
  /** Index of the recipe that predicts best. */
  readonly best: number;
}

/**
 * Compares ways to make a map by leaving out blocks of exposures, in order of time, and predicting them
 * from the rest. It chooses a weight without trusting the absolute level of the noise.
 *
 * @param trail Exposures, data, errors.
 * @param options Recipes and blocks.
 * @returns Prediction errors and the best recipe.
 * @throws {InputError} When there are fewer blocks than parts, or a map cannot be made.
 *
 * @example Too few exposures are refused
 * ```ts
 * import { crossValidate } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(40),
 * };
 * const trail = { sampling, flux: Float64Array.of(0), error: Float64Array.of(1) };
 * assertThrows(() => crossValidate(trail, { recipes: [] }));
 * ```
 */
export function crossValidate(
  trail: TrailSamples,
  options: CrossValidationOptions,
): CrossValidation {
  const { recipes, parts = 5, block = 2 } = options;
  const { sampling, flux, error } = trail;
  const blocks = Math.floor(sampling.count / block);
  if (blocks < parts || parts < 2) {
    throw new InputError({
      action: "leave out exposures",
      rule: `there must be at least two parts of ${block} exposures or more each`,
      value: sampling.count,
      unit: "exposures",
    });
  }
  const order = Array.from({ length: sampling.count }, (_, i) => i).sort((a, b) =>
    sampling.cycle[a]! - sampling.cycle[b]! || sampling.phase[a]! - sampling.phase[b]! || a - b
  );
  const part = new Uint32Array(sampling.count);
  order.forEach((i, place) => part[i] = Math.floor(place / block) % parts);

  const predicted_chi_square = Float64Array.from(recipes, (recipe) => {
    const invert = makeInverter(trail, recipe);
    const members = "blends" in recipe ? recipe.blends ?? [] : [];
    const projector = blendProjector(sampling, { ...recipe, members });
    const sign = "absorption" in recipe && recipe.absorption === true ? -1 : 1;
    let sum = 0, count = 0;
    for (let left = 0; left < parts; left++) {
      const masked = error.slice();
      for (let i = 0; i < sampling.count; i++) {
        if (part[i] === left) masked.fill(Infinity, sampling.start[i], sampling.start[i + 1]);
      }
      const { map, scale } = invert({ ...trail, error: masked });
      const model = projector.forward(map.intensity);
      for (let k = 0; k < flux.length; k++) {
        if (masked[k]! < Infinity || !(error[k]! < Infinity)) continue;
        sum += ((flux[k]! - sign * scale * model[k]!) / error[k]!) ** 2;
        count++;
      }
    }
    return sum / count;
  });
  return {
    predicted_chi_square,
    best: predicted_chi_square.reduce((b, x, i) => x < predicted_chi_square[b]! ? i : b, 0),
  };
}
