import type { Group } from "../display_list.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { ACCENT } from "../style.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/**
 * The light-centre diagram (Marsh 1988, MNRAS 231, 1117): the velocity vector of the wings' orbit,
 * (−K sin 2πφ0, −K cos 2πφ0), for rising separations, drawn out to where it meets the Vy axis.
 */
export interface LightCentre {
  /** K sin of each orbit: Vx, km/s, N values, in order of separation. */
  readonly vx_kms: ArrayLike<number>;
  /** Its standard deviation, km/s. */
  readonly vx_error_kms?: ArrayLike<number>;
  /** Vy, km/s, N values. */
  readonly vy_kms: ArrayLike<number>;
  /** Its standard deviation, km/s. */
  readonly vy_error_kms?: ArrayLike<number>;
  /** Straight line through the points, Vy = `intercept_kms` + slope Vx; null when none was fitted. @default {null} */
  readonly line?: {
    /** Vy at Vx = 0: −K1, km/s. */
    readonly intercept_kms: number;
    /** Its standard deviation, km/s. */
    readonly intercept_error_kms: number;
    /** Slope. */
    readonly slope: number;
  } | null;
}

/**
 * Draws the light-centre diagram.
 *
 * @param centre The vectors and the line through them.
 * @param options Place.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { lightCentrePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 90, height: 90 };
 * const centre = { vx_kms: [-40, -20], vy_kms: [-60, -65] };
 * assertEquals(lightCentrePanel(centre, { frame }).name, "light-centre");
 * ```
 */
export function lightCentrePanel(centre: LightCentre, options: PanelPlace): Group {
  const { frame, name = "light-centre", x_range, y_range } = options;
  const { vx_kms: x, vy_kms: y, vx_error_kms, vy_error_kms, line = null } = centre;
  const layers: PlotLayer[] = [
    { kind: "rule", x: 0 },
    {
      kind: "points",
      x,
      y,
      ...(vx_error_kms ? { x_error: vx_error_kms } : {}),
      ...(vy_error_kms ? { y_error: vy_error_kms } : {}),
    },
  ];
  if (line) {
    const far = Array.from(x).reduce((best, v) => Math.abs(v) > Math.abs(best) ? v : best, 0);
    const at = (vx: number) => line.intercept_kms + line.slope * vx;
    layers.push({
      kind: "line",
      x: [far, 0],
      y: [at(far), at(0)],
      width_pt: 0.6,
      dash_pt: [3, 1.6],
    });
    layers.push({
      kind: "points",
      x: [0],
      y: [line.intercept_kms],
      y_error: [line.intercept_error_kms],
      colour: ACCENT,
      shape: "diamond",
      radius_pt: 2,
      name: "−*K*_{1}",
    });
  }
  return plotPanel(layers, {
    frame,
    name,
    x: { label: `*V*_{x} (${KMS_LABEL})`, ticks: 4, ...(x_range ? { range: x_range } : {}) },
    y: { label: `*V*_{y} (${KMS_LABEL})`, ticks: 4, ...(y_range ? { range: y_range } : {}) },
  });
}
