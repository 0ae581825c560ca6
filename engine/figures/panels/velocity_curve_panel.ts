import type { Group } from "../display_list.ts";
import { lineLabel } from "../line_label.ts";
import { type PhaseCurve, phaseCurvePanel } from "./phase_curve_panel.ts";
import type { PanelPlace } from "./plot_panel.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/** Velocities of one star and the orbit fitted to them: V = γ + K sin 2π(φ − φ0). */
export interface FittedCurve extends PhaseCurve {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /** Its standard deviation, km/s; null when not known. @default {null} */
  readonly systemic_error_kms?: number | null;
  /** Amplitude K, km/s. */
  readonly k_kms: number;
  /** Its standard deviation, km/s; null when not known. @default {null} */
  readonly k_error_kms?: number | null;
  /** Phase φ0 at which the velocity crosses γ upwards, cycles. */
  readonly crossing_phase: number;
  /** Its standard deviation, cycles; null when not known. @default {null} */
  readonly crossing_error?: number | null;
}

/**
 * Draws velocity curves with their fits, and under them what is left of each.
 *
 * @param curves Velocities and fits, one or both stars.
 * @param options Place; the residual takes the lower quarter of the frame.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { velocityCurvePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 100, height: 100 };
 * const fit = { systemic_kms: 20, k_kms: 70, crossing_phase: 0.5 };
 * const curve = { ...fit, phase: [0.25, 0.75], value: [-48, 92], error: [5, 5] };
 * assertEquals(velocityCurvePanel([curve], { frame }).items.length, 2);
 * ```
 */
export function velocityCurvePanel(curves: readonly FittedCurve[], options: PanelPlace): Group {
  const { frame, name = "velocity-curve", y_range } = options;
  const lower = Math.max(24, frame.height / 4);
  const gap = 6;
  const top = { ...frame, height: frame.height - lower - gap };
  const bottom = { ...frame, y: frame.y + frame.height - lower, height: lower };
  const fitted = curves.map((curve) => ({
    ...curve,
    ...(curve.name === undefined ? {} : { name: lineLabel(curve.name) }),
    model: (phase: number) => fit(curve, phase),
  }));
  const left = curves.map((curve): PhaseCurve => ({
    phase: curve.phase,
    value: Array.from(curve.value, (v, i) => v - fit(curve, curve.phase[i]!)),
    ...(curve.error ? { error: curve.error } : {}),
    model: () => 0,
  }));
  return {
    kind: "group",
    name,
    items: [
      phaseCurvePanel(fitted, {
        frame: top,
        label: `velocity (${KMS_LABEL})`,
        hide_phase: true,
        ...(y_range ? { y_range } : {}),
      }),
      phaseCurvePanel(left, { frame: bottom, label: "residual", name: "residual" }),
    ],
  };
}

function fit(curve: FittedCurve, phase: number): number {
  const { systemic_kms, k_kms, crossing_phase } = curve;
  return systemic_kms + k_kms * Math.sin(2 * Math.PI * (phase - crossing_phase));
}
