import type { Sampling } from "../../trail/mod.ts";
import type { VelocityMap } from "../../tomography/mod.ts";
import { axisTicks, drawAxes } from "../axes.ts";
import { type ColourScale, paintGrid } from "../colour/colour_scale.ts";
import { type Box, boxPath, ellipsePath, type Group, type Item } from "../display_list.ts";
import { HAIRLINE_PT, QUIET } from "../style.ts";
import type { BinaryMarks } from "./binary_marks.ts";
import { exposureRing } from "./exposure_ring.ts";
import { drawBinaryMarks, drawFeatures, type MarkedFeature } from "./map_overlay.ts";
import { mapWindow, RING_PT, type WindowShape } from "./map_window.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/** How a velocity map is drawn. */
export interface MapPanelOptions {
  /** The square that holds the map and its ring, pt; axes stand outside it. */
  readonly frame: Box;
  /** Colours and limits. */
  readonly scale: ColourScale;
  /** Shape of the window; the round one leaves out velocities beyond the map's half-width. @default {"round"} */
  readonly shape?: WindowShape;
  /** Exposures for the ring; none when absent. */
  readonly sampling?: Pick<Sampling, "count" | "phase" | "phase_width">;
  /** Parts of the binary; null where it is not known. @default {null} */
  readonly marks?: BinaryMarks | null;
  /** Features found. @default {[]} */
  readonly features?: readonly MarkedFeature[];
  /** Items drawn over the map in its window: contours, rims, bands. @default {[]} */
  readonly overlay?: readonly Item[];
  /** False to leave out the label and values of the Vy axis. @default {true} */
  readonly y_labels?: boolean;
  /** True to name the parts of the binary. @default {true} */
  readonly named?: boolean;
  /** True where speeds are turned inside out: the axes count them from the rim. @default {false} */
  readonly inside_out?: boolean;
  /** Name of the group. @default {"map"} */
  readonly name?: string;
}

/**
 * Draws a velocity map: Vx to the right, Vy upwards, in a round window with the ring of exposures.
 *
 * @param map The map.
 * @param options Place, colours, overlays.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { mapPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 3, half_width_kms: 500, intensity: new Float64Array(9) };
 * const frame = { x: 34, y: 10, width: 150, height: 150 };
 * assertEquals(mapPanel(map, { frame, scale: { limits: [0, 1] } }).name, "map");
 * ```
 */
export function mapPanel(map: VelocityMap, options: MapPanelOptions): Group {
  const { frame, scale, shape = "round", sampling, marks = null, features = [] } = options;
  const { overlay = [], y_labels = true, named = true, inside_out = false, name = "map" } = options;
  const place = mapWindow(map, frame);
  const { window, reach_kms } = place;
  const centre = [window.x + window.width / 2, window.y + window.height / 2] as const;
  const outline = shape === "round"
    ? ellipsePath(centre, { rx: window.width / 2 })
    : boxPath(window);
  const grid = { rows: map.pixels, columns: map.pixels, values: map.intensity };
  const inside: Item[] = [
    paintGrid(grid, { box: window, scale }),
    ...overlay,
    ...(marks === null ? [] : drawBinaryMarks(marks, place, { named })),
    ...drawFeatures(features, place),
  ];
  const range = [-reach_kms, reach_kms] as const;
  const count = Math.max(2, Math.min(5, Math.round(window.width / 45)));
  const { ticks, format } = inside_out
    ? speedTicks(map.half_width_kms, count)
    : { ticks: count, format: undefined };
  const label = (axis: string) => `${inside_out ? "speed along " : ""}*V*_{${axis}} (${KMS_LABEL})`;
  const axes = drawAxes(window, {
    x: { range, ticks, label: label("x"), ...(format ? { format } : {}) },
    y: y_labels
      ? { range, ticks, label: label("y"), ...(format ? { format } : {}) }
      : { range, ticks, format: null },
    offset_pt: RING_PT,
    boxed: false,
  });
  return {
    kind: "group",
    name,
    items: [
      { kind: "group", clip: outline, items: inside },
      { kind: "path", d: outline, stroke: QUIET, stroke_pt: HAIRLINE_PT },
      ...(sampling ? exposureRing(sampling, { window, shape }) : []),
      ...axes,
    ],
  };
}

/** Ticks of an axis whose middle is the half-width and whose ends are at rest. */
function speedTicks(half_width_kms: number, count: number) {
  const speeds = axisTicks({ range: [0, half_width_kms], ticks: Math.ceil(count / 2) });
  const places = speeds.map(({ value }) => half_width_kms - value);
  return {
    ticks: [...places.map((place) => -place), ...places.toReversed().filter((place) => place > 0)],
    format: (place: number) => String(Math.round(half_width_kms - Math.abs(place))),
  };
}
