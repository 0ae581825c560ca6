import { ballisticStream, type Binary, donorMassFraction, lobeOutline } from "../../binary/mod.ts";
import type { Group } from "../display_list.ts";
import { type ColourScale, type Grid, paintGrid } from "../colour/colour_scale.ts";
import { type PlotLayer } from "../plot_layer.ts";
import { textWidth } from "../fonts.ts";
import { labelRuns } from "../runs.ts";
import { ACCENT, INK, LABEL_PT } from "../style.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";

/** The orbital plane as it is drawn: unit the separation, origin at the centre of mass. */
export interface DiscInSpace {
  /** The binary; its mass ratio alone is used. */
  readonly binary: Pick<Binary, "mass_ratio">;
  /** Radii of circles about the accretor, a, with their names (markup of `labelRuns`). @default {[]} */
  readonly circles?: readonly { readonly radius_over_a: number; readonly name?: string }[];
  /** Places found, about the accretor, a: x towards the donor, y along its motion. @default {[]} */
  readonly places?: readonly { readonly x: number; readonly y: number; readonly name?: string }[];
  /** A picture of the plane about the accretor and the half-width it covers; none when absent. */
  readonly image?: {
    /** Values, row 0 at the lowest y. */
    readonly grid: Grid;
    /** Half of its side, a, the accretor in the middle. */
    readonly half_width_over_a: number;
    /** Colours. */
    readonly scale: ColourScale;
  };
}

const X_RANGE = [-0.55, 1.4] as const;

/**
 * Draws the binary in space, seen from above its orbit: both lobes, the stream, circles of the
 * disc; the donor at the right, moving up the page.
 *
 * @param disc What is drawn.
 * @param options Place; the scale is the same along both axes, so a frame of 1 to 1.6 fits well.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { discSpacePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 160, height: 100 };
 * assertEquals(discSpacePanel({ binary: { mass_ratio: 0.2 } }, { frame }).name, "disc-in-space");
 * ```
 */
export function discSpacePanel(disc: DiscInSpace, options: PanelPlace): Group {
  const { frame, name = "disc-in-space", x_range = X_RANGE } = options;
  const { binary: { mass_ratio }, circles = [], places = [], image } = disc;
  const mu = donorMassFraction(mass_ratio);
  const half = (x_range[1] - x_range[0]) * frame.height / frame.width / 2;
  const shifted = (values: ArrayLike<number>) => Array.from(values, (x) => x - mu);
  const layers: PlotLayer[] = [];
  for (const star of ["accretor", "donor"] as const) {
    const { x, y } = lobeOutline(mass_ratio, { star, points: 180 });
    const lobe = { kind: "line", x: shifted(x), y, closed: true } as const;
    layers.push(star === "donor" ? { ...lobe, fill: INK } : { ...lobe, dash_pt: [2, 2] });
  }
  for (const { radius_over_a: r, name } of circles) {
    const angles = Array.from({ length: 121 }, (_, i) => 2 * Math.PI * i / 120);
    layers.push({
      kind: "line",
      x: angles.map((angle) => -mu + r * Math.cos(angle)),
      y: angles.map((angle) => r * Math.sin(angle)),
      width_pt: 0.6,
    });
    if (name) layers.push({ kind: "note", x: -mu, y: -r, text: name, anchor: "middle" });
  }
  const { points } = ballisticStream(mass_ratio, { points: 80 });
  const stream = { x: shifted(points.map((p) => p.x)), y: points.map((p) => p.y) };
  layers.push({ kind: "line", ...stream });
  layers.push({ kind: "points", x: [-mu], y: [0], radius_pt: 1.2 });
  for (const { x, y, name } of places) {
    const mark = { kind: "points", x: [x - mu], y: [y], colour: ACCENT, shape: "diamond" } as const;
    layers.push(name ? { ...mark, name } : mark);
  }
  const panel = plotPanel(layers, {
    frame,
    name,
    x: { range: x_range, label: xLabel(frame.width), ticks: [-0.5, 0, 0.5, 1] },
    y: { range: [-half, half], label: "*y*/*a*", ticks: [-0.5, 0, 0.5] },
  });
  if (!image) return panel;
  const unit = frame.width / (x_range[1] - x_range[0]);
  const side = 2 * image.half_width_over_a * unit;
  const box = {
    x: frame.x + (-mu - x_range[0]) * unit - side / 2,
    y: frame.y + frame.height / 2 - side / 2,
    width: side,
    height: side,
  };
  return { ...panel, items: [paintGrid(image.grid, { box, scale: image.scale }), ...panel.items] };
}

/** The longest label that the frame has room for. */
function xLabel(width_pt: number): string {
  const full = "*x*/*a* from the centre of mass";
  return textWidth(labelRuns(full), LABEL_PT) <= width_pt ? full : "*x*/*a*";
}
