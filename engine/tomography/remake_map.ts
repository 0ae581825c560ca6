import { blendProjector } from "./blend_projector.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type InversionRecipe, makeInverter } from "./invert_trail.ts";
import type { VelocityMap } from "./velocity_map.ts";

/**
 * Inverts the data that a map itself would give, without noise, with the same errors: what an inversion
 * does to this map it has done to the truth, more or less. The difference is the inversion's bias.
 *
 * @param trail The trail the map was made of: its exposures and errors.
 * @param options The recipe, with multiplier or weight held at that of the map, and the map.
 * @returns The map of the map.
 * @throws {InputError} When the data cannot be mapped.
 * @throws {NotConverged} When iterations run out.
 *
 * @example
 * ```ts
 * import { makeProjector, remakeMap } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
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
 * const shape = { pixels: 41, half_width_kms: 400 };
 * const intensity = new Float64Array(41 * 41);
 * intensity[30 * 41 + 12] = 1;
 * const recipe = { inversion: "back-projection", ...shape, systemic_kms: 0 } as const;
 * const flux = makeProjector(sampling, recipe).forward(intensity);
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const remade = remakeMap(trail, { recipe, map: { ...shape, intensity } });
 * assert(remade.intensity[30 * 41 + 12]! < 0.5); // spread over the resolution
 * ```
 */
export function remakeMap(
  trail: TrailSamples,
  options: { readonly recipe: InversionRecipe; readonly map: VelocityMap },
): VelocityMap {
  const { recipe, map } = options;
  const sign = "absorption" in recipe && recipe.absorption === true ? -1 : 1;
  const members = "blends" in recipe ? recipe.blends ?? [] : [];
  const projector = blendProjector(trail.sampling, { ...recipe, members });
  const flux = projector.forward(map.intensity).map((f) => sign * f);
  return makeInverter(trail, recipe)({ ...trail, flux }).map;
}
