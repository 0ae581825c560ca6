import type { Group } from "../display_list.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { INK, QUIET } from "../style.ts";
import type { DisplayGrid } from "./folded_grid.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/** How stacked profiles are drawn. */
export interface StackedProfilesOptions extends PanelPlace {
  /** Profiles over the orbit; exposures are averaged within each. @default {12} */
  readonly bins?: number;
  /** Model on the trail's grid, R × C, drawn under the data; none when absent. */
  readonly model?: Float64Array;
}

/**
 * Draws a trail as profiles one above the other, averaged in bins of phase: the way to see the
 * shape of each. Each stands on the level of its phase.
 *
 * @param grid The trail's grid.
 * @param options Place, bins, model.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { stackedProfilesPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const grid = {
 *   rows: 1, columns: 3, first_kms: -100, step_kms: 100,
 *   phase: Float64Array.of(0.5), phase_width: Float64Array.of(0.1),
 *   flux: Float64Array.of(0, 1, 0), error: Float64Array.of(1, 1, 1),
 * };
 * const frame = { x: 30, y: 10, width: 100, height: 160 };
 * assertEquals(stackedProfilesPanel(grid, { frame }).name, "stacked-profiles");
 * ```
 */
export function stackedProfilesPanel(grid: DisplayGrid, options: StackedProfilesOptions): Group {
  const { frame, name = "stacked-profiles", bins = 12, model } = options;
  const { columns, first_kms, step_kms } = grid;
  const x = Float64Array.from({ length: columns }, (_, i) => first_kms + i * step_kms);
  const data = binnedRows(grid, { values: grid.flux, bins });
  const peak = data.flat().reduce(
    (top, v) => Number.isFinite(v) ? Math.max(top, Math.abs(v)) : top,
    0,
  ) || 1;
  const rise = 2 / bins / peak; // the highest reaches two levels up, the deepest two down
  const onLevel = (rows: readonly number[][], bin: number) =>
    rows[bin]!.map((value) => (bin + 0.5) / bins + rise * value);
  const fitted = model ? binnedRows(grid, { values: model, bins }) : null;
  const layers: PlotLayer[] = [];
  // From the top down: a lower profile stands in front.
  for (let bin = bins - 1; bin >= 0; bin--) {
    if (data[bin]!.every(Number.isNaN)) continue;
    if (fitted) {
      layers.push({ kind: "line", x, y: onLevel(fitted, bin), colour: QUIET, width_pt: 1.4 });
    }
    layers.push({
      kind: "line",
      x,
      y: onLevel(data, bin),
      colour: INK,
      width_pt: 0.6,
      steps: true,
    });
  }
  return plotPanel(layers, {
    frame,
    name,
    x: {
      range: [first_kms - step_kms / 2, first_kms + (columns - 0.5) * step_kms],
      label: `velocity (${KMS_LABEL})`,
      ticks: Math.max(3, Math.round(frame.width / 36)),
    },
    y: { range: [0, 1 + 2 / bins], ticks: [0, 0.25, 0.5, 0.75, 1], label: "orbital phase" },
  });
}

/** Means over phase bins, weighted by inverse variance; NaN where nothing was seen. */
function binnedRows(
  grid: DisplayGrid,
  options: { readonly values: Float64Array; readonly bins: number },
): number[][] {
  const { rows, columns, phase, error } = grid;
  const { values, bins } = options;
  const sum = Array.from({ length: bins }, () => new Array<number>(columns).fill(0));
  const weights = Array.from({ length: bins }, () => new Array<number>(columns).fill(0));
  for (let row = 0; row < rows; row++) {
    const bin = Math.min(bins - 1, Math.floor(phase[row]! * bins));
    for (let column = 0; column < columns; column++) {
      const at = row * columns + column;
      const weight = 1 / error[at]! ** 2;
      if (!(weight > 0) || !Number.isFinite(values[at]!)) continue;
      sum[bin]![column]! += weight * values[at]!;
      weights[bin]![column]! += weight;
    }
  }
  return sum.map((row, bin) =>
    row.map((total, i) => weights[bin]![i] === 0 ? NaN : total / weights[bin]![i]!)
  );
}
