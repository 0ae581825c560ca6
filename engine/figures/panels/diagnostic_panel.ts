import type { Group } from "../display_list.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { ACCENT } from "../style.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/**
 * Orbit fits against the separation of the two Gaussians that measured the wings (Schneider & Young
 * 1980; Shafter 1983).
 */
export interface DiagnosticDiagram {
  /** Separation of the Gaussians, km/s, N values, increasing. */
  readonly separation_kms: ArrayLike<number>;
  /** Amplitude K, km/s, N values. */
  readonly k_kms: ArrayLike<number>;
  /** Its standard deviation, km/s, N values. */
  readonly k_error_kms: ArrayLike<number>;
  /** Systemic velocity, km/s, N values. */
  readonly systemic_kms: ArrayLike<number>;
  /** Its standard deviation, km/s, N values. */
  readonly systemic_error_kms?: ArrayLike<number>;
  /** Phase of upward crossing, cycles, N values. */
  readonly crossing_phase: ArrayLike<number>;
  /** Its standard deviation, cycles, N values. */
  readonly crossing_error?: ArrayLike<number>;
  /** Separation that was chosen, km/s; null when none was. @default {null} */
  readonly chosen_kms?: number | null;
}

/**
 * Draws the diagnostic diagram: σ(K)/K, K, γ (km/s) and the crossing phase against separation, one
 * above the other.
 *
 * @param diagram The fits.
 * @param options Place; the four strips share the frame.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { diagnosticPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const panel = diagnosticPanel({
 *   separation_kms: [1000, 1500], k_kms: [80, 75], k_error_kms: [4, 6],
 *   systemic_kms: [20, 22], crossing_phase: [0.55, 0.52], chosen_kms: 1500,
 * }, { frame: { x: 30, y: 10, width: 100, height: 200 } });
 * assertEquals(panel.items.length, 4);
 * ```
 */
export function diagnosticPanel(diagram: DiagnosticDiagram, options: PanelPlace): Group {
  const { frame, name = "diagnostic" } = options;
  const { k_kms, k_error_kms, chosen_kms = null } = diagram;
  const relative = Array.from(k_error_kms, (error, i) => error / k_kms[i]!);
  const strips = [
    { label: "*σ*_{K}/*K*", y: relative, error: undefined },
    { label: "*K*", y: k_kms, error: k_error_kms },
    { label: "*γ*", y: diagram.systemic_kms, error: diagram.systemic_error_kms },
    { label: "*φ*_{0}", y: diagram.crossing_phase, error: diagram.crossing_error },
  ];
  const gap = 5;
  const height = (frame.height - 3 * gap) / 4;
  const ticks = Math.max(2, Math.round(frame.width / 38));
  return {
    kind: "group",
    name,
    items: strips.map(({ label, y, error }, i) => {
      const x = diagram.separation_kms;
      const last = i === strips.length - 1;
      const layers: PlotLayer[] = [{ kind: "points", x, y, ...(error ? { y_error: error } : {}) }];
      if (chosen_kms !== null) {
        const label = i === 0 ? "chosen" : undefined;
        layers.unshift({
          kind: "rule",
          x: chosen_kms,
          colour: ACCENT,
          ...(label ? { name: label } : {}),
        });
      }
      return plotPanel(layers, {
        frame: { ...frame, y: frame.y + i * (height + gap), height },
        name: `${name}-${i + 1}`,
        x: last
          ? { label: `separation (${KMS_LABEL})`, ticks, ...range(options.x_range) }
          : { ticks, format: null, ...range(options.x_range) },
        y: { label, ticks: 3 },
      });
    }),
  };
}

function range(value: PanelPlace["x_range"]) {
  return value ? { range: value } : {};
}
