import { makeGrid } from "../trail/mod.ts";
import { backProject, type BackProjectionOptions } from "./back_projection.ts";
import { blendProjector } from "./blend_projector.ts";
import { checkTrail, type TrailSamples } from "./check_trail.ts";
import { fitOfMap } from "./map_fit.ts";
import { type EntropyMap, maximumEntropy, type MaximumEntropyOptions } from "./maximum_entropy.ts";
import { makeProjector, type Projector } from "./projector.ts";
import { totalVariation, type TotalVariationOptions } from "./total_variation.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A way to make a map: plain data, so that it can be sent to a worker or kept in a file. */
export type InversionRecipe =
  | ({ readonly inversion: "back-projection"; readonly force?: boolean } & BackProjectionOptions)
  | ({ readonly inversion: "entropy" } & Omit<MaximumEntropyOptions, "projector">)
  | ({ readonly inversion: "total-variation" } & Omit<TotalVariationOptions, "projector">);

/** A map with its fit to the data, whatever made it. */
export interface Inversion {
  /** The map. */
  readonly map: VelocityMap;
  /** The map's data, laid out as the samples; for back-projection scaled to fit. */
  readonly model: Float64Array;
  /** Factor that the map's data were multiplied by to give the model: 1 but for back-projection. */
  readonly scale: number;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Iterations; 0 for back-projection. */
  readonly iterations: number;
  /** Multiplier of the entropy or weight of the variation; null for back-projection. */
  readonly multiplier: number | null;
}

/** A recipe made ready for exposures: what does not depend on the data is done once. */
export type Inverter = (trail: TrailSamples) => Inversion;

/**
 * Makes a recipe ready for the exposures of a trail, so that it can be run on resampled data without
 * making the projector again.
 *
 * @param trail The trail, of which the sampling matters here.
 * @param recipe How to make the map.
 * @returns A function from data with that sampling to a map.
 *
 * @example
 * ```ts
 * import { makeInverter, makeProjector, mapPeak } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const count = 20, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 41, half_width_kms: 400, systemic_kms: 0 };
 * const truth = new Float64Array(41 * 41);
 * truth[30 * 41 + 12] = 1; // (-160, +200) km/s
 * const flux = makeProjector(sampling, shape).forward(truth);
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const invert = makeInverter(trail, { inversion: "back-projection", ...shape });
 * assertAlmostEquals(mapPeak(invert(trail).map).vx_kms, -160, 2);
 * ```
 */
export function makeInverter(trail: TrailSamples, recipe: InversionRecipe): Inverter {
  const { sampling } = trail;
  if (recipe.inversion !== "back-projection") {
    const projector = blendProjector(sampling, { ...recipe, members: recipe.blends ?? [] });
    return recipe.inversion === "entropy"
      ? (data) => described(maximumEntropy(data, { ...recipe, projector }))
      : (data) => {
        const found = totalVariation(data, { ...recipe, projector });
        return described({ ...found, multiplier: found.weight });
      };
  }
  let projector: Projector | undefined;
  return (data) => {
    checkTrail(data, recipe);
    const { half_width_kms, systemic_kms } = recipe;
    const grid = makeGrid(data.sampling, data, {
      reach_kms: 1.2 * half_width_kms + Math.abs(systemic_kms),
    });
    const map = backProject({ grid }, recipe);
    projector ??= makeProjector(sampling, recipe);
    const { model, scale, reduced_chi_square } = fitOfMap(data, {
      model: projector.forward(map.intensity),
      scale: "fitted",
    });
    return { map, model, scale, reduced_chi_square, iterations: 0, multiplier: null };
  };
}

function described(
  found: Pick<
    EntropyMap,
    "map" | "model" | "reduced_chi_square" | "iterations" | "multiplier"
  >,
): Inversion {
  const { map, model, reduced_chi_square, iterations, multiplier } = found;
  return { map, model, scale: 1, reduced_chi_square, iterations, multiplier };
}
