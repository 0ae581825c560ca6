import { type Axis, drawAxes, plotPlace } from "../axes.ts";
import { type Box, boxPath, type Group, type Item } from "../display_list.ts";
import { drawLayer, type PlotLayer } from "../plot_layer.ts";

/** How a plot is drawn. */
export interface PlotPanelOptions {
  /** The plotting area, pt; axes stand outside it. */
  readonly frame: Box;
  /** Horizontal axis; its range is taken from the layers when absent. */
  readonly x: PlotAxis;
  /** Vertical axis; its range is taken from the layers when absent. */
  readonly y: PlotAxis;
  /** Name of the group. @default {"plot"} */
  readonly name?: string;
}

/** An axis whose range may be left to the data. */
export type PlotAxis = Omit<Axis, "range"> & {
  /** Values at its ends; from the layers when absent. */
  readonly range?: readonly [from: number, to: number];
};

/** Options that panels of one kind leave open: where, and under which name. */
export interface PanelPlace {
  /** The plotting area, pt; axes stand outside it. */
  readonly frame: Box;
  /** Name of the group; the kind of panel when absent. */
  readonly name?: string;
  /** Range of the horizontal axis; from the data when absent. */
  readonly x_range?: readonly [from: number, to: number];
  /** Range of the vertical axis; from the data when absent. */
  readonly y_range?: readonly [from: number, to: number];
}

/**
 * Draws layers in a frame with axes: every line plot is made of this.
 *
 * @param layers What is drawn, the lowest first; words stand over all lines.
 * @param options Frame and axes.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { plotPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 100, height: 60 };
 * const panel = plotPanel([{ kind: "line", x: [0, 1], y: [2, 3] }], {
 *   frame,
 *   x: { label: "phase" },
 *   y: { label: "flux" },
 * });
 * assertEquals(panel.kind, "group");
 * ```
 */
export function plotPanel(layers: readonly PlotLayer[], options: PlotPanelOptions): Group {
  const { frame, name = "plot" } = options;
  const x = { ...options.x, range: options.x.range ?? layerRange(layers, "x") };
  const y = { ...options.y, range: options.y.range ?? layerRange(layers, "y") };
  const place = { ...plotPlace(frame, { x, y }), x_range: x.range, y_range: y.range };
  const drawn = layers.flatMap((layer) => drawLayer(layer, place));
  const lines: Item[] = drawn.filter((item) => item.kind !== "text");
  const words: Item[] = drawn.filter((item) => item.kind === "text");
  return {
    kind: "group",
    name,
    items: [
      { kind: "group", clip: boxPath(frame), items: lines },
      ...drawAxes(frame, { x, y }),
      ...words,
    ],
  };
}

/**
 * The range of the layers' values, errors included, with a margin: 2 % along x, 6 % along y.
 *
 * @param layers The layers.
 * @param direction Which axis.
 * @returns Its ends, always apart; [0, 1] when there is no value.
 *
 * @example
 * ```ts
 * import { layerRange } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const points = { kind: "points", x: [0, 100], y: [1, 2], y_error: [1, 1] } as const;
 * assertEquals(layerRange([points], "x"), [-2, 102]);
 * ```
 */
export function layerRange(
  layers: readonly PlotLayer[],
  direction: "x" | "y",
): [from: number, to: number] {
  let low = Infinity;
  let high = -Infinity;
  const take = (value: number) => {
    if (!Number.isFinite(value)) return;
    low = Math.min(low, value);
    high = Math.max(high, value);
  };
  for (const layer of layers) {
    if (layer.kind === "rule" || layer.kind === "note") {
      const value = layer[direction];
      if (value !== undefined) take(value);
    } else if (layer.kind === "band") {
      const columns = direction === "x" ? [layer.x] : [layer.low, layer.high];
      for (const column of columns) Array.from(column).forEach(take);
    } else {
      const errors = layer.kind === "points" ? layer[`${direction}_error`] : undefined;
      Array.from(layer[direction]).forEach((value, i) => {
        const error = errors?.[i] ?? 0;
        take(value - (Number.isFinite(error) ? error : 0));
        take(value + (Number.isFinite(error) ? error : 0));
      });
    }
  }
  if (low > high) return [0, 1];
  const margin = (high - low) * (direction === "x" ? 0.02 : 0.06) || Math.abs(high) * 0.1 || 1;
  return [low - margin, high + margin];
}
