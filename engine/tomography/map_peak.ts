import { mapStep } from "./map_shape.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** The brightest place of a map. */
export interface MapPeak {
  /** Vx, km/s. */
  readonly vx_kms: number;
  /** Vy, km/s. */
  readonly vy_kms: number;
  /** Intensity there, normalised flux × km/s per (km/s)². */
  readonly intensity: number;
}

/**
 * The brightest place of a map, between pixels by a parabola along each axis through the brightest
 * pixel and its neighbours.
 *
 * @param map The map.
 * @returns Place and intensity.
 *
 * @example
 * ```ts
 * import { mapPeak } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const peak = mapPeak({
 *   pixels: 3,
 *   half_width_kms: 100,
 *   intensity: Float64Array.of(0, 0, 0, 0, 1, 0, 0, 1, 0),
 * });
 * assertEquals([peak.vx_kms, peak.vy_kms], [0, 50]);
 * ```
 */
export function mapPeak(map: VelocityMap): MapPeak {
  const { pixels, half_width_kms, intensity } = map;
  const step = mapStep(map);
  let best = 0;
  for (let k = 1; k < intensity.length; k++) if (intensity[k]! > intensity[best]!) best = k;
  const column = best % pixels, row = (best - column) / pixels;
  const x = vertex(intensity, best, { step: 1, inside: column > 0 && column < pixels - 1 });
  const y = vertex(intensity, best, { step: pixels, inside: row > 0 && row < pixels - 1 });
  return {
    vx_kms: (column + x.at) * step - half_width_kms,
    vy_kms: (row + y.at) * step - half_width_kms,
    intensity: intensity[best]! + x.rise + y.rise,
  };
}

function vertex(
  values: Float64Array,
  k: number,
  { step, inside }: { readonly step: number; readonly inside: boolean },
): { at: number; rise: number } {
  if (!inside) return { at: 0, rise: 0 };
  const a = values[k - step]!, b = values[k]!, c = values[k + step]!;
  const bend = a - 2 * b + c;
  if (!(bend < 0)) return { at: 0, rise: 0 };
  const at = 0.5 * (a - c) / bend;
  return { at, rise: -0.25 * (a - c) * at };
}
