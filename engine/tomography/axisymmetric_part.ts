import { median } from "../numerics/mod.ts";
import { mapStep } from "./map_shape.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A place in the velocity map. */
export interface MapPlace {
  /** Vx, km/s. */
  readonly vx_kms: number;
  /** Vy, km/s. */
  readonly vy_kms: number;
}

/** Options of {@linkcode axisymmetricPart}. */
export interface AxisymmetricOptions {
  /** Centre of the rings: the accretor, (0, −K1), where it is known. */
  readonly centre: MapPlace;
  /**
   * What stands for a ring: `median` leaves compact excesses out, `mean` keeps the flux.
   *
   * @default {"median"}
   */
  readonly statistic?: "median" | "mean";
}

/**
 * The part of a map that depends on the distance from a centre alone: the median (or mean) over
 * rings one pixel wide, interpolated linearly in between.
 *
 * @param map The map.
 * @param options Centre and statistic.
 * @returns A map of the same shape.
 *
 * @example A ring is its own axisymmetric part
 * ```ts
 * import { axisymmetricPart } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 3, half_width_kms: 10, intensity: new Float64Array(9).fill(2) };
 * const part = axisymmetricPart(map, { centre: { vx_kms: 0, vy_kms: -3 } });
 * assertEquals(part.intensity, map.intensity);
 * ```
 */
export function axisymmetricPart(map: VelocityMap, options: AxisymmetricOptions): VelocityMap {
  const { centre, statistic = "median" } = options;
  const { pixels, half_width_kms, intensity } = map;
  const step = mapStep(map);
  const radius = intensity.map((_, k) => {
    const vx = (k % pixels) * step - half_width_kms;
    const vy = Math.floor(k / pixels) * step - half_width_kms;
    return Math.hypot(vx - centre.vx_kms, vy - centre.vy_kms) / step;
  });
  const rings: number[][] = [];
  radius.forEach((r, k) => (rings[Math.round(r)] ??= []).push(intensity[k]!));
  const levels: number[] = [];
  for (let ring = 0; ring < rings.length; ring++) {
    const values = rings[ring];
    levels.push(
      values === undefined
        ? (levels[ring - 1] ?? 0)
        : statistic === "median"
        ? median(values)
        : values.reduce((a, b) => a + b, 0) / values.length,
    );
  }
  return {
    pixels,
    half_width_kms,
    intensity: radius.map((r) => {
      const below = Math.min(Math.floor(r), levels.length - 1);
      const above = Math.min(below + 1, levels.length - 1);
      return levels[below]! + (r - below) * (levels[above]! - levels[below]!);
    }),
  };
}
