import type { Group } from "../display_list.ts";
import { lineLabel } from "../line_label.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { INK } from "../style.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";

/** Exposures of one night or set-up. */
export interface CoverageRow {
  /** Name written at the left. */
  readonly name: string;
  /** Phases at mid-exposure, N values. */
  readonly phase: ArrayLike<number>;
  /** Widths in phase, cycles, N values. */
  readonly phase_width: ArrayLike<number>;
}

/**
 * Draws which phases were observed, one level per night, the first at the top: each exposure as
 * long as it lasted.
 *
 * @param rows Nights or set-ups.
 * @param options Place.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { coveragePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 50, y: 10, width: 150, height: 40 };
 * const night = { name: "night 1", phase: [0.1, 0.2], phase_width: [0.05, 0.05] };
 * assertEquals(coveragePanel([night], { frame }).name, "coverage");
 * ```
 */
export function coveragePanel(rows: readonly CoverageRow[], options: PanelPlace): Group {
  const { frame, name = "coverage" } = options;
  const layers = rows.flatMap((row, i): PlotLayer[] => {
    const level = rows.length - 1 - i;
    return Array.from(row.phase, (phase, k): PlotLayer => {
      const half = row.phase_width[k]! / 2;
      const x = [phase - half, phase + half];
      const y = [level, level];
      // A part beyond either end of the orbit is drawn at the other.
      const wrapped = phase - half < 0 ? 1 : phase + half > 1 ? -1 : 0;
      const again = wrapped === 0 ? [] : [NaN, x[0]! + wrapped, x[1]! + wrapped];
      const levels = again.map(() => level);
      return {
        kind: "line",
        x: [...x, ...again],
        y: [...y, ...levels],
        colour: INK,
        width_pt: Math.min(9, 0.5 * frame.height / Math.max(1, rows.length)),
      };
    });
  });
  return plotPanel(layers, {
    frame,
    name,
    x: { range: [0, 1], label: "orbital phase", ticks: [0, 0.25, 0.5, 0.75, 1] },
    y: {
      range: [-0.6, rows.length - 0.4],
      ticks: rows.map((_, i) => rows.length - 1 - i),
      format: (level) => lineLabel(rows[rows.length - 1 - level]?.name ?? ""),
    },
  });
}
