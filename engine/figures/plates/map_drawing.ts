import type { VelocityMap } from "../../tomography/mod.ts";
import { tidyExponent } from "../colour/colour_bar.ts";
import { robustLimits } from "../colour/limits.ts";
import type { Group, Item } from "../display_list.ts";
import { binaryMarks, type VelocityCurve } from "../panels/binary_marks.ts";
import { discRims, uncertainBand } from "../panels/map_marks.ts";
import { mapPanel } from "../panels/map_panel.ts";
import type { MapCentre } from "../panels/map_profile.ts";
import { mapWindow } from "../panels/map_window.ts";
import { KMS_LABEL } from "../panels/trail_panel.ts";
import { mapHeading } from "./map_heading.ts";
import type { PanelDrawing, PanelScale } from "./panel_kind.ts";
import type { PlateStyle } from "./plate_description.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** Unit of a map's intensity: flux over continuum × km/s, per (km/s)². */
export const INTENSITY_UNIT = `(${KMS_LABEL})^{−1}`;

/** A scale whose values are written with a power of ten where they are small or large. */
export function powered(scale: Omit<PanelScale, "unit" | "divide_by">, unit: string): PanelScale {
  const exponent = tidyExponent(scale.limits);
  if (exponent === 0) return { ...scale, unit, divide_by: 1 };
  const power = `× 10^{${String(exponent).replace("-", "−")}}`;
  return { ...scale, unit: `${power} ${unit}`, divide_by: 10 ** exponent };
}

/** Limits that keep 99.95 % of the pixels of all maps: a spot of a few pixels stays within. */
export function limitsOf(maps: readonly VelocityMap[], symmetric = false): [number, number] {
  const ends = maps.map((map) => robustLimits(map.intensity, { part: 0.9995, symmetric }));
  return [Math.min(...ends.map((end) => end[0])), Math.max(...ends.map((end) => end[1]))];
}

/** Colours of maps that are nowhere negative. */
export function intensityScale(maps: readonly VelocityMap[], style: PlateStyle): PanelScale {
  const { colour_map: map = "ink", stretch, map_limits } = style;
  return powered({ map, stretch, limits: map_limits ?? limitsOf(maps) }, INTENSITY_UNIT);
}

/** The accretor in the map; the middle where it is not known. */
export function centreOf(subject: PlateSubject): MapCentre {
  return { vx_kms: 0, vy_kms: subject.binary ? -subject.binary.k_accretor_kms : 0 };
}

type StreamEnds = [VelocityCurve, VelocityCurve];

/** How a map is drawn. */
export interface MapDrawing extends PanelDrawing {
  /** False to leave out the features. @default {true} */
  readonly marked?: boolean;
  /** Name of the panel. */
  readonly name: string;
  /** Items over the map. @default {[]} */
  readonly overlay?: readonly Item[];
}

/** Draws a map with its binary, features and ring. */
export function drawMap(map: VelocityMap, subject: PlateSubject, drawing: MapDrawing): Group {
  const { frame, scale, style, first, marked = true, name, overlay = [] } = drawing;
  const { binary, binary_range, features, trail, rims = [] } = subject;
  const place = mapWindow(map, frame);
  const streams = binary_range?.map((end) => binaryMarks(end).stream) as StreamEnds | undefined;
  const accretor = [0, centreOf(subject).vy_kms] as const;
  // Names stand once among neighbours, and not where they would hide a small map.
  const named = first && place.window.width > 100;
  const roomy = named && place.window.width > 160;
  const unnamed = rims.map(({ speed_kms }) => ({ speed_kms }));
  const panel = mapPanel(map, {
    frame,
    named,
    scale: scale!,
    name,
    y_labels: first,
    ...(style.shape ? { shape: style.shape } : {}),
    ...(trail ? { sampling: trail.sampling } : {}),
    marks: binary && binaryMarks(binary),
    ...(marked && features ? { features } : {}),
    overlay: [
      ...(streams ? uncertainBand(streams, place) : []),
      ...(rims.length > 0 ? discRims(roomy ? rims : unnamed, { place, accretor }) : []),
      ...overlay,
    ],
  });
  return { ...panel, items: [...panel.items, ...mapHeading(subject, frame)] };
}

/** Maps side by side share their axes where they show the same velocities. */
function mapAxis({ map, detection_limit }: PlateSubject): string {
  const { pixels, half_width_kms } = map ?? detection_limit ?? { pixels: 0, half_width_kms: 0 };
  return `map ${pixels} ${half_width_kms}`;
}

/** Maps keep their shape. */
export const MAP_SHAPE = { aspect: 1, weight: 3, height_pt: 200, axis: mapAxis } as const;
