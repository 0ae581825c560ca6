import { axisymmetricPart, type MapPlace } from "./axisymmetric_part.ts";
import { blendProjector } from "./blend_projector.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type Inversion, type InversionRecipe, makeInverter } from "./invert_trail.ts";
import { mapExplainer } from "./explained_map.ts";
import { mapExcess } from "./map_excess.ts";
import type { SimpleSourcesOptions } from "./simple_sources.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** Options of {@linkcode featureBias}. */
export interface ReinversionOptions {
  /** How the map is made; for entropy and variation with the multiplier or weight held. */
  readonly recipe: InversionRecipe;
  /** The inversion of the trail by that recipe. */
  readonly found: Inversion;
  /**
   * Centre of the axisymmetric part.
   *
   * @default {{ vx_kms: 0, vy_kms: 0 }}
   */
  readonly centre?: MapPlace;
}

/**
 * Structures that the sampling alone makes: the round disc that fits the data best is put through the same
 * exposures and the same inversion, without noise, and its axisymmetric part taken off the result.
 * {@linkcode mapFeatures} states what features are beyond them.
 *
 * @param trail Exposures, data, errors.
 * @param options Recipe, centre, resolution.
 * @returns What the sampling makes of a round disc.
 *
 * @example Forty even phases make next to nothing
 * ```ts
 * import { makeProjector, samplingStructures } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 40, bins = 81;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 40)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 61, half_width_kms: 600, systemic_kms: 0 };
 * const round = Float64Array.from({ length: 61 * 61 }, (_, k) =>
 *   1e-4 * Math.exp(-0.5 * ((k % 61 - 30) ** 2 + (Math.floor(k / 61) - 30) ** 2) / 100)
 * );
 * const flux = makeProjector(sampling, shape).forward(round);
 * const trail = { sampling, flux, error: flux.map(() => 1e-4) };
 * const recipe = { inversion: "back-projection", ...shape } as const;
 * const made = samplingStructures(trail, { recipe, resolution_kms: 94 });
 * assert(made.intensity.every((f) => Math.abs(f) < 0.05e-4));
 * ```
 */
export function samplingStructures(
  trail: TrailSamples,
  options: SimpleSourcesOptions & {
    /** What the explainer of these options gives without spots. @default {made here} */
    readonly alone?: VelocityMap;
  },
): VelocityMap {
  const { centre = { vx_kms: 0, vy_kms: 0 }, alone = mapExplainer(trail, options)([]) } = options;
  const kept = axisymmetricPart(alone, { centre, statistic: "mean" });
  return { ...alone, intensity: alone.intensity.map((f, k) => f - kept.intensity[k]!) };
}

/**
 * How the inversion changes the flux of features: the map's own data are inverted again, without noise.
 * What a second pass does to the features of the first is, in kind, what the first did to the truth.
 *
 * @param trail Exposures and errors.
 * @param options Recipe, map, peaks of the features, resolution.
 * @returns For each peak, flux of the excess in the second map over that in the first; NaN where it is lost.
 *
 * @example
 * ```ts
 * import { featureBias } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(featureBias.length, 2);
 * ```
 */
export function featureBias(
  trail: TrailSamples,
  options: ReinversionOptions & {
    readonly peaks: readonly number[];
    readonly resolution_kms: number;
  },
): Float64Array {
  const { found, peaks, resolution_kms, centre = { vx_kms: 0, vy_kms: 0 } } = options;
  const look = { centre, resolution_kms };
  const before = mapExcess(found.map, look);
  const after = mapExcess(reinverted(trail, { ...options, intensity: found.map.intensity }), look);
  return Float64Array.from(peaks, (peak) => {
    const a = before.blobAt(peak), b = after.blobAt(after.climb(peak));
    return a === null || b === null ? NaN : b.flux_fraction / a.flux_fraction;
  });
}

function reinverted(
  trail: TrailSamples,
  options: ReinversionOptions & { readonly intensity: Float64Array },
): VelocityMap {
  const { recipe, intensity } = options;
  const sign = "absorption" in recipe && recipe.absorption === true ? -1 : 1;
  const members = "blends" in recipe ? recipe.blends ?? [] : [];
  const projector = blendProjector(trail.sampling, { ...recipe, members });
  const flux = projector.forward(intensity).map((f) => sign * f);
  return makeInverter(trail, recipe)({ ...trail, flux }).map;
}
