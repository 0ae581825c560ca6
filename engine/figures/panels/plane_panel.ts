import { type ColourScale, paintGrid } from "../colour/colour_scale.ts";
import type { Box, Group } from "../display_list.ts";
import type { NoteLayer, PlotLayer } from "../plot_layer.ts";
import { plotPlace } from "../axes.ts";
import { textWidth } from "../fonts.ts";
import { labelRuns } from "../runs.ts";
import { ACCENT, INK, NOTE_PT } from "../style.ts";
import { curveNames } from "./curve_names.ts";
import { layerRange, type PanelPlace, plotPanel } from "./plot_panel.ts";

/** What is known about two quantities at once. */
export interface Plane {
  /** Curves that a measurement allows, each with its name (markup of `labelRuns`), perhaps as a band of ± one σ. */
  readonly curves?: readonly PlaneCurve[];
  /** Areas that are not allowed, as closed curves with their names. */
  readonly excluded?: readonly PlaneCurve[];
  /** Sampled pairs, drawn as a density. */
  readonly samples?: { readonly x: ArrayLike<number>; readonly y: ArrayLike<number> };
  /** The adopted pair. */
  readonly adopted?: {
    /** Horizontal value. */
    readonly x: number;
    /** Vertical value. */
    readonly y: number;
    /** Its standard deviation. */
    readonly x_error?: number;
    /** Its standard deviation. */
    readonly y_error?: number;
  };
}

/** A curve in a plane of two quantities. */
export interface PlaneCurve {
  /** Name (markup of `labelRuns`). */
  readonly name: string;
  /** N values. */
  readonly x: readonly number[];
  /** N values. */
  readonly y: readonly number[];
  /** Lower edge of its band of uncertainty, N values. */
  readonly low?: ArrayLike<number>;
  /** Upper edge, N values. */
  readonly high?: ArrayLike<number>;
}

/** How a plane is drawn. */
export interface PlanePanelOptions extends PanelPlace {
  /** Label of the horizontal quantity (markup of `labelRuns`). */
  readonly x_label: string;
  /** Label of the vertical quantity (markup of `labelRuns`). */
  readonly y_label: string;
}

/**
 * Draws what constrains two quantities: allowed curves with their bands, excluded areas, the density of
 * samples, the adopted pair.
 *
 * @param plane The constraints.
 * @param options Place, labels. Without ranges the axes reach the adopted pair itself, or six of its errors, to
 * either side.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { planePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const options = { frame: { x: 30, y: 10, width: 90, height: 90 }, x_label: "x", y_label: "y" };
 * assertEquals(planePanel({ adopted: { x: 1, y: 2 } }, options).name, "plane");
 * ```
 */
export function planePanel(plane: Plane, options: PlanePanelOptions): Group {
  const { frame, name = "plane", x_label, y_label, x_range, y_range } = options;
  const { curves = [], excluded = [], samples, adopted } = plane;
  const layers: PlotLayer[] = [];
  const areas = excluded.map(({ x, y }): PlotLayer => {
    return { kind: "line", x, y, closed: true, fill: INK, width_pt: 0.4 };
  });
  for (const { x, y, low, high } of curves) {
    if (low && high) layers.push({ kind: "band", x, low, high });
    layers.push({ kind: "line", x, y });
  }
  if (adopted) {
    const { x, y, x_error = 0, y_error = 0 } = adopted;
    layers.push({
      kind: "points",
      x: [x],
      y: [y],
      x_error: [x_error],
      y_error: [y_error],
      colour: ACCENT,
      radius_pt: 2,
    });
  }
  const cloud: PlotLayer[] = samples ? [{ kind: "points", ...samples, radius_pt: 0 }] : [];
  const all = [...areas, ...layers, ...cloud];
  const around = adopted && {
    x: about(adopted.x, adopted.x_error),
    y: about(adopted.y, adopted.y_error),
  };
  const xs = x_range ?? around?.x ?? layerRange(all, "x");
  const ys = y_range ?? around?.y ?? layerRange(all, "y");
  const unit_pt = frame.width / (xs[1] - xs[0]);
  const names = excluded.map((area) => areaName(area, unit_pt))
    .filter(({ x, y }) => x > xs[0] && x < xs[1] && y > ys[0] && y < ys[1]);
  const free = adopted ? [boxAround(adopted, { frame, x_range: xs, y_range: ys })] : [];
  const along = curveNames(curves, { frame, x_range: xs, y_range: ys, free });
  const panel = plotPanel([...areas, ...layers, ...names, ...along], {
    frame,
    name,
    x: { range: xs, label: x_label, ticks: Math.max(3, Math.round(frame.width / 36)) },
    y: { range: ys, label: y_label, ticks: Math.max(3, Math.round(frame.height / 28)) },
  });
  if (!samples) return panel;
  const density = sampleDensity(samples, { x_range: xs, y_range: ys, frame });
  return { ...panel, items: [density, ...panel.items] };
}

/** A value itself or six of its errors to either side, whichever is more, above zero. */
function about(value: number, error = 0): [number, number] {
  const reach = Math.max(Math.abs(value), 6 * error) || 1;
  return [Math.max(0, value - reach), value + reach];
}

/** The adopted pair with its errors, pt. */
function boxAround(
  pair: NonNullable<Plane["adopted"]>,
  options: Pick<PlanePanelOptions, "frame"> & {
    readonly x_range: readonly [number, number];
    readonly y_range: readonly [number, number];
  },
): Box {
  const { x, y, x_error = 0, y_error = 0 } = pair;
  const axes = { x: { range: options.x_range }, y: { range: options.y_range } };
  const place = plotPlace(options.frame, axes);
  const [left, right] = [place.x(x - x_error) - 3, place.x(x + x_error) + 3];
  const [top, bottom] = [place.y(y + y_error) - 3, place.y(y - y_error) + 3];
  return { x: left, y: top, width: right - left, height: bottom - top };
}

/** The name of an area in its middle, upright where the area is too narrow for it. */
function areaName(area: PlaneCurve, unit_pt: number): NoteLayer {
  const [left, right] = [Math.min(...area.x), Math.max(...area.x)];
  const y = (Math.min(...area.y) + Math.max(...area.y)) / 2;
  const upright = (right - left) * unit_pt < textWidth(labelRuns(area.name), NOTE_PT) + 4;
  const x = (left + right) / 2 + (upright ? 0.35 * NOTE_PT / unit_pt : 0);
  const turn = upright ? { rotate_deg: -90 } : {};
  return { kind: "note", x, y, text: area.name, anchor: "middle", ...turn };
}

const CELLS = 48;

function sampleDensity(
  samples: NonNullable<Plane["samples"]>,
  options: {
    readonly x_range: readonly [number, number];
    readonly y_range: readonly [number, number];
    readonly frame: PanelPlace["frame"];
  },
) {
  const unit = { x: 0, y: 0, width: CELLS, height: CELLS };
  const place = plotPlace(unit, { x: { range: options.x_range }, y: { range: options.y_range } });
  const values = new Float64Array(CELLS * CELLS);
  for (let i = 0; i < samples.x.length; i++) {
    const column = Math.floor(place.x(samples.x[i]!));
    const row = Math.floor(CELLS - place.y(samples.y[i]!));
    if (column >= 0 && column < CELLS && row >= 0 && row < CELLS) values[row * CELLS + column]!++;
  }
  const peak = values.reduce((top, value) => Math.max(top, value), 1);
  const scale: ColourScale = { limits: [0, 1.6 * peak], stretch: "square-root" };
  const blank = values.map((value) => value === 0 ? NaN : value);
  return paintGrid({ rows: CELLS, columns: CELLS, values: blank }, { box: options.frame, scale });
}

/**
 * Draws the plane of the two masses.
 *
 * @param plane Constraints on accretor (horizontal) and donor (vertical), solar masses.
 * @param options Place.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { massPlanePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 90, height: 90 };
 * assertEquals(massPlanePanel({ adopted: { x: 0.85, y: 0.18 } }, { frame }).name, "mass-plane");
 * ```
 */
export function massPlanePanel(plane: Plane, options: PanelPlace): Group {
  return planePanel(plane, {
    name: "mass-plane",
    x_label: "*M*_{1} (M_{☉})",
    y_label: "*M*_{2} (M_{☉})",
    ...options,
  });
}

/**
 * Draws the plane of mass ratio and inclination.
 *
 * @param plane Constraints on q (horizontal) and i in degrees (vertical).
 * @param options Place.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { inclinationPlanePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 90, height: 90 };
 * const plane = { adopted: { x: 0.2, y: 68 } };
 * assertEquals(inclinationPlanePanel(plane, { frame }).name, "inclination-plane");
 * ```
 */
export function inclinationPlanePanel(plane: Plane, options: PanelPlace): Group {
  return planePanel(plane, {
    name: "inclination-plane",
    ...(plane.adopted ? { y_range: tilts(plane.adopted) } : {}),
    x_label: "mass ratio *q*",
    y_label: "inclination (°)",
    ...options,
  });
}

/** Inclinations about the adopted one, as far as 90°. */
function tilts({ y, y_error = 0 }: NonNullable<Plane["adopted"]>): [number, number] {
  return [Math.max(0, Math.min(y / 2, y - 6 * y_error)), 90];
}
