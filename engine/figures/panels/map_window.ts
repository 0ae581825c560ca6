import type { VelocityMap } from "../../tomography/mod.ts";
import type { Box } from "../display_list.ts";
import { type PlotPlace, plotPlace } from "../axes.ts";

/** How a map's window is cut. */
export type WindowShape = "round" | "square";

/** Where a velocity map stands on the page. */
export interface MapWindow extends PlotPlace {
  /** The square that the map's pixels fill, pt. */
  readonly window: Box;
  /** Velocity from the middle to the edge of the outermost pixel, km/s. */
  readonly reach_kms: number;
}

/** Width of the border around a map's window, in which the ring and its phases stand, pt. */
export const RING_PT = 17;

/**
 * Places a map in a frame, a border left around it for the ring of exposures: Vx to the right, Vy
 * upwards, pixel edges (not centres) at the window's edges.
 *
 * @param map The map, or its size alone.
 * @param frame The square on the page, border included.
 * @returns Where its velocities stand.
 *
 * @example
 * ```ts
 * import { mapWindow } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, { x: 0, y: 0, width: 200, height: 200 });
 * assertEquals([place.x(0), place.y(0)], [100, 100]);
 * assertEquals(place.reach_kms, 1010);
 * ```
 */
export function mapWindow(
  map: Pick<VelocityMap, "pixels" | "half_width_kms">,
  frame: Box,
): MapWindow {
  const side = Math.min(frame.width, frame.height) - 2 * RING_PT;
  const window = {
    x: frame.x + (frame.width - side) / 2,
    y: frame.y + (frame.height - side) / 2,
    width: side,
    height: side,
  };
  const reach_kms = map.half_width_kms * map.pixels / (map.pixels - 1);
  const range = [-reach_kms, reach_kms] as const;
  return { ...plotPlace(window, { x: { range }, y: { range } }), window, reach_kms };
}
