import type { TrailSamples } from "./check_trail.ts";
import type { Inverter } from "./invert_trail.ts";
import { separateMaps, type SeparateMapsOptions, separateProjector } from "./separate_maps.ts";

/** How the maps of lines that overlap are made together: plain data, so that it can be sent to a worker. */
export type SeparateRecipe =
  & { readonly inversion: "separate-entropy" }
  & Omit<SeparateMapsOptions, "operator">;

/**
 * Makes a recipe for the maps of overlapping lines ready for the exposures of a trail. All maps are fitted
 * anew to each data; the first line's is given, so that its scatter has in it what the lines take from
 * one another.
 *
 * @param trail The trail, of which the sampling matters here.
 * @param recipe How to make the maps.
 * @returns A function from data with that sampling to the first line's map; its model is that of all lines.
 *
 * @example
 * ```ts
 * import { makeSeparateInverter, separateProjector } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 16, bins = 91;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 35)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const rest_ratios = [1, 1 + 400 / 299792.458];
 * const shape = { pixels: 21, half_width_kms: 400, systemic_kms: 0, rest_ratios };
 * const truth = new Float64Array(882);
 * truth[12 * 21 + 6] = 0.01;
 * const flux = separateProjector(sampling, shape).forward(truth).map((f, k) => f + 0.01 * Math.cos(k * k));
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const invert = makeSeparateInverter(trail, {
 *   inversion: "separate-entropy",
 *   ...shape,
 *   reduced_chi_square: 1,
 * });
 * assert(invert(trail).map.intensity[12 * 21 + 6]! > 0.0005);
 * ```
 */
export function makeSeparateInverter(trail: TrailSamples, recipe: SeparateRecipe): Inverter {
  const operator = separateProjector(trail.sampling, recipe);
  return (data) => {
    const found = separateMaps(data, { ...recipe, operator });
    const { model, reduced_chi_square, iterations, multiplier } = found;
    return { map: found.maps[0]!, model, scale: 1, reduced_chi_square, iterations, multiplier };
  };
}
