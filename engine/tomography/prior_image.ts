import { axisymmetricPart, type MapPlace } from "./axisymmetric_part.ts";
import { mapBlur } from "./blur_map.ts";
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

/** Options of {@linkcode priorImage}. */
export interface PriorImageOptions extends MapShape {
  /** Level of the uniform image, and of the floor of the others. */
  readonly level: number;
}

/**
 * Prepares the default image that belongs to a current image.
 *
 * @param prior Kind of default image.
 * @param options Map's shape and the level.
 * @returns A function from the current image to its default image, pixels² positive values.
 *
 * @example
 * ```ts
 * import { priorImage } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const prior = priorImage({ kind: "uniform" }, { pixels: 3, half_width_kms: 10, level: 2 });
 * assertEquals(prior(new Float64Array(9).fill(4)), new Float64Array(9).fill(2));
 * ```
 */
export function priorImage(
  prior: PriorImage,
  options: PriorImageOptions,
): (image: Float64Array) => Float64Array {
  const { level, pixels, half_width_kms } = options;
  const floor = FLOOR * level;
  // In place: a new image at every step of a solution would cost as much as the blurring.
  const raised = (values: Float64Array) => {
    for (let k = 0; k < values.length; k++) if (values[k]! < floor) values[k] = floor;
    return values;
  };
  const rings = (centre: MapPlace, intensity: Float64Array) =>
    axisymmetricPart({ pixels, half_width_kms, intensity }, { centre, statistic: "mean" })
      .intensity;
  switch (prior.kind) {
    case "uniform": {
      const image = new Float64Array(pixels * pixels).fill(level);
      return () => image;
    }
    case "blurred": {
      const blur = mapBlur({ ...options, fwhm_kms: prior.fwhm_kms });
      return (image) => raised(blur(image));
    }
    case "axisymmetric":
      return (image) => raised(rings(prior.centre, image));
    case "mixed": {
      const blur = mapBlur({ ...options, fwhm_kms: prior.fwhm_kms });
      return (image) => {
        const round = raised(rings(prior.centre, image));
        const mixed = raised(blur(image));
        for (let k = 0; k < mixed.length; k++) mixed[k] = Math.sqrt(mixed[k]! * round[k]!);
        return mixed;
      };
    }
    case "image": {
      const image = raised(prior.map.intensity.slice());
      return () => image;
    }
  }
}
