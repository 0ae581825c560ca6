import { axisymmetricPart, type VelocityMap } from "../../tomography/mod.ts";
import { type ColourScale } from "../colour/colour_scale.ts";
import { robustLimits } from "../colour/limits.ts";
import type { Group } from "../display_list.ts";
import { mapPanel, type MapPanelOptions } from "./map_panel.ts";
import type { MapCentre } from "./map_profile.ts";

/**
 * What a map leaves when its axisymmetric part about a centre is taken away: spots, arms, streams.
 *
 * @param map The map.
 * @param options The centre: the accretor.
 * @returns A map of the same shape, positive where the map is brighter than its rings.
 *
 * @example
 * ```ts
 * import { asymmetricMap } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 3, half_width_kms: 10, intensity: new Float64Array(9).fill(2) };
 * assertEquals([...asymmetricMap(map).intensity], Array(9).fill(0));
 * ```
 */
export function asymmetricMap(
  map: VelocityMap,
  options: {
    /** The accretor. @default {{ vx_kms: 0, vy_kms: 0 }} */
    readonly centre?: MapCentre;
  } = {},
): VelocityMap {
  const { centre = { vx_kms: 0, vy_kms: 0 } } = options;
  const even = axisymmetricPart(map, { centre }).intensity;
  return { ...map, intensity: map.intensity.map((value, i) => value - even[i]!) };
}

/**
 * The significance of a map: its value over its spread, pixel by pixel.
 *
 * @param map The map, or its asymmetric part.
 * @param spread One standard deviation of each pixel from resampled maps, same shape.
 * @returns A map in standard deviations; NaN where the spread is zero.
 *
 * @example
 * ```ts
 * import { significanceMap } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const shape = { pixels: 1, half_width_kms: 0 };
 * const map = { ...shape, intensity: Float64Array.of(6) };
 * assertEquals(significanceMap(map, { ...shape, intensity: Float64Array.of(2) }).intensity[0], 3);
 * ```
 */
export function significanceMap(map: VelocityMap, spread: VelocityMap): VelocityMap {
  const intensity = map.intensity.map((value, i) => {
    const sigma = spread.intensity[i]!;
    return sigma > 0 ? value / sigma : NaN;
  });
  return { ...map, intensity };
}

/**
 * Draws two maps on one scale, side by side: odd and even exposures, two nights, two lines.
 *
 * @param maps The two maps.
 * @param options Their frames; colours from both maps together when no scale is given.
 * @returns Both panels, and the scale that they share.
 *
 * @example
 * ```ts
 * import { mapPair } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 3, half_width_kms: 500, intensity: new Float64Array(9).fill(2) };
 * const frame = { x: 34, y: 10, width: 100, height: 100 };
 * const pair = mapPair([map, map], { frames: [frame, { ...frame, x: 150 }] });
 * assertEquals(pair.panels.length, 2);
 * ```
 */
export function mapPair(
  maps: readonly [VelocityMap, VelocityMap],
  options: Omit<MapPanelOptions, "frame" | "scale" | "name"> & {
    /** Frames of the two panels, pt. */
    readonly frames: readonly [MapPanelOptions["frame"], MapPanelOptions["frame"]];
    /** Colours; common robust limits when absent. */
    readonly scale?: ColourScale;
  },
): { readonly panels: readonly [Group, Group]; readonly scale: ColourScale } {
  const { frames, ...rest } = options;
  const both = [...maps[0].intensity, ...maps[1].intensity];
  const scale = options.scale ?? { limits: robustLimits(both, { part: 0.9995 }) };
  const panel = (i: 0 | 1) =>
    mapPanel(maps[i], {
      ...rest,
      frame: frames[i],
      scale,
      name: `map-${i + 1}`,
      y_labels: i === 0 && rest.y_labels !== false,
    });
  return { panels: [panel(0), panel(1)], scale };
}
