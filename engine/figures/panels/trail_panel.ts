import { type Axis, drawAxes, plotPlace } from "../axes.ts";
import { type ColourScale, paintGrid } from "../colour/colour_scale.ts";
import { type Box, boxPath, type Group, type Item, linePath } from "../display_list.ts";
import { ACCENT, CURVE_PT, INK, PAPER } from "../style.ts";
import { type DisplayGrid, foldedGrid } from "./folded_grid.ts";

/** A curve V(φ) over a trail, drawn over as many cycles as are shown. */
export interface TrailCurve {
  /** Velocity at a phase in [0, 1), km/s. */
  readonly velocity_kms: (phase: number) => number;
  /** Colour. @default {the accent} */
  readonly colour?: string;
}

/** How a trail is drawn. */
export interface TrailPanelOptions {
  /** The plotting area, pt; axes stand outside it. */
  readonly frame: Box;
  /** Colours and limits. */
  readonly scale: ColourScale;
  /** Values on the trail's grid, when not its flux: a model, a residual. */
  readonly values?: Float64Array;
  /** Cycles shown from phase 0 upwards. @default {2} */
  readonly cycles?: number;
  /** True to name the velocity axis. @default {true} */
  readonly x_label?: boolean;
  /** Width that the name may take, pt: it is shorter where there is little. @default {the frame's width} */
  readonly x_room_pt?: number;
  /** Place of the middle of the name, pt. @default {that of the frame} */
  readonly x_label_x?: number;
  /** False to leave out the phases: a neighbour shows them. @default {true} */
  readonly y_labels?: boolean;
  /** Systemic velocity, marked at the top; null for no mark. @default {null} */
  readonly systemic_kms?: number | null;
  /** Curves drawn over the trail. @default {[]} */
  readonly curves?: readonly TrailCurve[];
  /** Name of the group. @default {"trail"} */
  readonly name?: string;
}

/** The unit of velocity as it stands on axes. */
export const KMS_LABEL = "km s^{−1}";

/**
 * Draws a trail: velocity to the right, phase upwards, over two cycles; phases without an exposure
 * are blank.
 *
 * @param grid The trail's grid.
 * @param options Place, colours, values.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { trailPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const grid = {
 *   rows: 1, columns: 3, first_kms: -100, step_kms: 100,
 *   phase: Float64Array.of(0.5), phase_width: Float64Array.of(0.5),
 *   flux: Float64Array.of(0, 1, 0), error: Float64Array.of(1, 1, 1),
 * };
 * const frame = { x: 30, y: 10, width: 60, height: 100 };
 * assertEquals(trailPanel(grid, { frame, scale: { limits: [0, 1] } }).name, "trail");
 * ```
 */
export function trailPanel(grid: DisplayGrid, options: TrailPanelOptions): Group {
  const { frame, scale, values, cycles = 2, systemic_kms = null, curves = [] } = options;
  const { x_label = true, y_labels = true, name = "trail" } = options;
  const range = velocityRange(grid);
  const axes = {
    x: velocityAxis(range, {
      length_pt: frame.width,
      room_pt: options.x_room_pt ?? frame.width,
      named: x_label,
      label_x: options.x_label_x,
    }),
    y: {
      range: [0, cycles] as const,
      ticks: Array.from({ length: 2 * cycles + 1 }, (_, i) => i / 2),
      label: y_labels ? "orbital phase" : undefined,
      format: y_labels ? (phase: number) => phase.toFixed(1) : null,
    },
  };
  const place = plotPlace(frame, axes);
  const image = paintGrid(foldedGrid(grid, { values, cycles }), { box: frame, scale });
  const items: Item[] = [];
  for (const { velocity_kms, colour = ACCENT } of curves) {
    const steps = 120 * cycles;
    const d = linePath(Array.from({ length: steps + 1 }, (_, i) => {
      const phase = i / 120;
      return [place.x(velocity_kms(phase % 1)), place.y(phase)] as const;
    }));
    items.push({ kind: "path", d, stroke: PAPER, stroke_pt: 2.2 * CURVE_PT, stroke_opacity: 0.8 });
    items.push({ kind: "path", d, stroke: colour, stroke_pt: CURVE_PT });
  }
  const marks: Item[] = systemic_kms === null ? [] : [systemicMark(place.x(systemic_kms), frame.y)];
  return {
    kind: "group",
    name,
    items: [
      image,
      // Clipping costs the renderer a layer: only where something may leave the frame.
      ...(items.length > 0 ? [{ kind: "group", clip: boxPath(frame), items } as const] : []),
      ...drawAxes(frame, axes),
      ...marks,
    ],
  };
}

/** Edges of the first and the last velocity bin, km/s. */
function velocityRange(grid: DisplayGrid): [low: number, high: number] {
  const low = grid.first_kms - grid.step_kms / 2;
  return [low, low + grid.columns * grid.step_kms];
}

/** A velocity axis; a short one counts in thousands, so that its values fit. */
function velocityAxis(
  range: readonly [number, number],
  options: { length_pt: number; room_pt: number; named: boolean; label_x?: number },
): Axis {
  const thousands = options.length_pt < 110 && range[1] - range[0] > 1500;
  const unit = thousands ? `10^{3} ${KMS_LABEL}` : KMS_LABEL;
  return {
    range,
    ticks: Math.max(3, Math.round(options.length_pt / (thousands ? 18 : 30))),
    ...(thousands ? { format: (value) => String(value / 1000).replace("-", "−") } : {}),
    ...(options.named ? { label: `${options.room_pt < 90 ? "*V*" : "velocity"} (${unit})` } : {}),
    ...(options.label_x === undefined ? {} : { label_x: options.label_x }),
  };
}

/** A small wedge on the upper edge. */
function systemicMark(x: number, top: number): Item {
  const d = linePath([[x, top + 4], [x - 2, top], [x + 2, top]], true);
  return { kind: "path", d, fill: INK, stroke: PAPER, stroke_pt: 0.4 };
}
