import { contours } from "d3-contour";
import type { VelocityMap } from "../../tomography/mod.ts";
import { type Item, linePath } from "../display_list.ts";
import type { PlotPlace } from "../axes.ts";
import { CURVE_PT, INK, PAPER } from "../style.ts";

/** How contours are drawn. */
export interface ContourOptions {
  /** Levels, in the unit of the map. */
  readonly levels: readonly number[];
  /** Where velocities stand on the page. */
  readonly place: PlotPlace;
  /** Colour. @default {INK} */
  readonly colour?: string;
  /** Dashes and gaps, pt. */
  readonly dash_pt?: readonly number[];
}

/**
 * Draws contours of a map: of its intensity, of significance, of a detection limit.
 *
 * @param map The map, or another map of the same shape.
 * @param options Levels, place, style.
 * @returns Items for the overlay of a map panel.
 *
 * @example
 * ```ts
 * import { mapContours, mapWindow } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 3, half_width_kms: 100, intensity: Float64Array.of(0, 0, 0, 0, 1, 0, 0, 0, 0) };
 * const place = mapWindow(map, { x: 0, y: 0, width: 64, height: 64 });
 * const items = mapContours(map, { levels: [0.5], place });
 * assertEquals(items.length, 2); // paper underneath, ink above
 * ```
 */
export function mapContours(map: VelocityMap, options: ContourOptions): Item[] {
  const { levels, place, colour = INK, dash_pt } = options;
  const { pixels, half_width_kms, intensity } = map;
  const step = 2 * half_width_kms / (pixels - 1);
  // Sample i of the library stands at i + 0.5.
  const velocity = (at: number) => -half_width_kms + (at - 0.5) * step;
  const edge = (at: number) => at <= 0.5 || at >= pixels - 0.5;
  const values = Array.from(intensity, (value) => Number.isFinite(value) ? value : -Infinity);
  const rings = contours().size([pixels, pixels]).smooth(true).thresholds([...levels])(values)
    .flatMap((level) => level.coordinates.flat());
  const d = rings.map((ring) =>
    // The library closes rings along the border; those pieces are no contour.
    linePath(ring.flatMap(([x, y], i) => {
      const [px, py] = ring[i - 1] ?? [x!, y!];
      const along = i > 0 && ((edge(x!) && edge(px!)) || (edge(y!) && edge(py!)));
      const point = [place.x(velocity(x!)), place.y(velocity(y!))] as const;
      return along ? [[NaN, NaN] as const, point] : [point];
    }))
  ).join("");
  return [
    { kind: "path", d, stroke: PAPER, stroke_pt: CURVE_PT + 0.9, stroke_opacity: 0.8 },
    { kind: "path", d, stroke: colour, stroke_pt: 0.7 * CURVE_PT, ...(dash_pt ? { dash_pt } : {}) },
  ];
}
