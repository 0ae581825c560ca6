import { axisymmetricPart, type MapPlace } from "./axisymmetric_part.ts";
import { blurMap } from "./blur_map.ts";
import type { MapShape } from "./map_shape.ts";
import type { VelocityMap } from "./velocity_map.ts";

/**
 * The image that maximum entropy falls back on where the data say nothing.
 *
 * `uniform`: one level. `blurred`: the current map smoothed by a Gaussian (Marsh & Horne 1988),
 * which leaves the broad distribution alone and smooths the rest. `axisymmetric`: the current map's
 * mean over rings about a centre, which asks for the least departure from symmetry. `mixed`: the
 * geometric mean of the last two. `image`: a given map, which must be positive.
 */
export type PriorImage =
  | { readonly kind: "uniform" }
  | { readonly kind: "blurred"; readonly fwhm_kms: number }
  | { readonly kind: "axisymmetric"; readonly centre: MapPlace }
  | { readonly kind: "mixed"; readonly fwhm_kms: number; readonly centre: MapPlace }
  | { readonly kind: "image"; readonly map: VelocityMap };

/** Share of the level that a default image never falls below, so that its logarithm exists. */
const FLOOR = 1e-6;

/**
 * The default image that belongs to a current image.
 *
 * @param prior Kind of default image.
 * @param options Map's shape, current image, and the level: of the uniform image, and of the floor.
 * @returns Default image, pixels² positive values.
 *
 * @example
 * ```ts
 * import { priorImage } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const image = new Float64Array(9).fill(4);
 * const options = { pixels: 3, half_width_kms: 10, image, level: 2 };
 * assertEquals(priorImage({ kind: "uniform" }, options), new Float64Array(9).fill(2));
 * ```
 */
export function priorImage(
  prior: PriorImage,
  options: MapShape & { readonly image: Float64Array; readonly level: number },
): Float64Array {
  const { image, level, pixels, half_width_kms } = options;
  const floor = FLOOR * level;
  const round = (centre: MapPlace) =>
    axisymmetricPart({ pixels, half_width_kms, intensity: image }, { centre, statistic: "mean" })
      .intensity;
  switch (prior.kind) {
    case "uniform":
      return new Float64Array(image.length).fill(level);
    case "blurred":
      return blurMap(image, { ...options, fwhm_kms: prior.fwhm_kms })
        .map((f) => Math.max(f, floor));
    case "axisymmetric":
      return round(prior.centre).map((f) => Math.max(f, floor));
    case "mixed": {
      const rings = round(prior.centre);
      return blurMap(image, { ...options, fwhm_kms: prior.fwhm_kms })
        .map((f, k) => Math.sqrt(Math.max(f, floor) * Math.max(rings[k]!, floor)));
    }
    case "image":
      return prior.map.intensity.map((f) => Math.max(f, floor));
  }
}
