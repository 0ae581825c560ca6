import { NotConverged } from "../errors.ts";
import { makeGrid } from "../trail/mod.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import { blendProjector } from "./blend_projector.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type Inversion, type InversionRecipe, makeInverter } from "./invert_trail.ts";
import { fitSimpleSources, type SimpleSourcesOptions, type SpotPlace } from "./simple_sources.ts";
import type { VelocityMap } from "./velocity_map.ts";

/**
 * A map that spots at places, and a disc whose centre is moved by so much, explain.
 *
 * @param places Where the spots are.
 * @param moved How far the disc's centre is moved, km/s; not at all by default.
 */
export type MapExplainer = (places: readonly SpotPlace[], moved?: MapPlace) => VelocityMap;

/**
 * What exposures and inversion make of the simplest source that fits the data: a perfectly round disc and
 * spots at given places, seen at the same phases without noise and inverted alike. What a map shows
 * beyond that is neither the sampling of a round disc nor the streaks of those spots.
 *
 * @param trail The trail that the map was made of.
 * @param options The recipe, with multiplier or weight held at that of the map; resolution; centre.
 * @returns A function from the places of spots, and how far the disc's centre is moved, to the map.
 *
 * @example A map of a round disc has nothing beyond it, however few the exposures
 * ```ts
 * import {
 *   makeInverter,
 *   makeProjector,
 *   mapExplainer,
 * } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 8, bins = 61;
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
 * const disc = Float64Array.from({ length: 41 * 41 }, (_, k) =>
 *   Math.exp(-0.5 * ((k % 41 - 20) ** 2 + (Math.floor(k / 41) - 20) ** 2) / 36)
 * );
 * const flux = makeProjector(sampling, shape).forward(disc);
 * const trail = { sampling, flux, error: flux.map(() => 1) };
 * const recipe = { inversion: "back-projection", ...shape } as const;
 * const { map } = makeInverter(trail, recipe)(trail);
 * const alone = mapExplainer(trail, { recipe, resolution_kms: 94 })([]);
 * assert(map.intensity.every((f, k) => Math.abs(f - alone.intensity[k]!) < 0.05));
 * ```
 */
export function mapExplainer(
  trail: TrailSamples,
  options: SimpleSourcesOptions,
): MapExplainer {
  const { recipe } = options;
  const fit = fitSimpleSources(trail, options);
  const members = "blends" in recipe ? recipe.blends ?? [] : [];
  const projector = blendProjector(trail.sampling, { ...recipe, members });
  const turn = "absorption" in recipe && recipe.absorption === true ? -1 : 1;
  const invert = makeInverter(trail, withFilterOf(trail, recipe));
  const known = new Map<string, VelocityMap>();
  const made = (places: readonly SpotPlace[], moved?: MapPlace) => {
    const flux = projector.forward(fit(places, moved)).map((f) => turn * f);
    try {
      return invert({ ...trail, flux }).map;
    } catch (error) {
      // Data without noise can be fitted beyond what iterations allow: the last map is that map by then.
      if (!(error instanceof NotConverged)) throw error;
      return (error.partial as Inversion).map;
    }
  };
  return (places, moved) => {
    const key = [...places, moved].map((p) => p && `${p.vx_kms} ${p.vy_kms}`).join();
    const old = known.get(key) ?? made(places, moved);
    known.set(key, old);
    return old;
  };
}

/** Back-projection holds the filter that the observed noise asks for, as the others hold their multiplier. */
function withFilterOf(trail: TrailSamples, recipe: InversionRecipe): InversionRecipe {
  if (recipe.inversion !== "back-projection") return recipe;
  const { half_width_kms, systemic_kms } = recipe;
  const grid = makeGrid(trail.sampling, trail, {
    reach_kms: 1.2 * half_width_kms + Math.abs(systemic_kms),
  });
  return { ...recipe, filter_of: { grid } };
}
