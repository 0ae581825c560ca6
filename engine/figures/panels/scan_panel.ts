import type { Group } from "../display_list.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { ACCENT, INK } from "../style.ts";
import { layerRange, type PanelPlace, plotPanel } from "./plot_panel.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/** A statistic against one parameter that was stepped through. */
export interface Scan {
  /** Values of the parameter, N, increasing. */
  readonly x: ArrayLike<number>;
  /** The statistic, N values. */
  readonly y: ArrayLike<number>;
  /** The best value; null when there is none. @default {null} */
  readonly best?: number | null;
  /** Its standard deviation; null when not known. @default {null} */
  readonly best_error?: number | null;
  /** A value from elsewhere, to compare with the best one; null for none. @default {null} */
  readonly reference?: number | null;
  /** Levels of the statistic with their names (markup of `labelRuns`), such as false-alarm levels. @default {[]} */
  readonly levels?: readonly { readonly y: number; readonly name: string }[];
}

/** How a scan is drawn. */
export interface ScanOptions extends PanelPlace {
  /** Label of the parameter (markup of `labelRuns`). */
  readonly x_label: string;
  /** Label of the statistic (markup of `labelRuns`). */
  readonly y_label: string;
}

/**
 * Draws a statistic against a parameter, with the best value, its error as a band, a value to compare with, and levels.
 *
 * @param scan The values.
 * @param options Place and labels.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { scanPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 100, height: 60 };
 * const scan = { x: [0, 1, 2], y: [3, 1, 3], best: 1, best_error: 0.2 };
 * assertEquals(scanPanel(scan, { frame, x_label: "shift", y_label: "misfit" }).name, "scan");
 * ```
 */
export function scanPanel(scan: Scan, options: ScanOptions): Group {
  const { frame, name = "scan", x_label, y_label, x_range, y_range } = options;
  const { best = null, best_error = null, reference = null, levels = [] } = scan;
  const layers: PlotLayer[] = [{ kind: "line", x: scan.x, y: scan.y, colour: INK, width_pt: 0.7 }];
  for (const level of levels) layers.push({ kind: "rule", y: level.y, name: level.name });
  const range = y_range ?? layerRange(layers, "y");
  const under: PlotLayer[] = [];
  if (best !== null && best_error !== null) {
    const x = [best - best_error, best + best_error];
    const [low, high] = range.map((end) => [end, end]) as [number[], number[]];
    under.push({ kind: "band", x, low, high, colour: ACCENT });
  }
  if (reference !== null) under.push({ kind: "rule", x: reference, colour: INK, dash_pt: [1, 2] });
  if (best !== null) under.push({ kind: "rule", x: best, colour: ACCENT, dash_pt: [] });
  return plotPanel([...under, ...layers], {
    frame,
    name,
    x: { label: x_label, ticks: tickCount(frame.width, 36), range: x_range ?? ends(scan.x) },
    y: { label: y_label, ticks: tickCount(frame.height, 22), range },
  });
}

/**
 * Draws a periodogram: power against frequency, the best period marked, false-alarm levels named.
 *
 * @param scan Frequencies in cycles per day and powers.
 * @param options Place.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { periodogramPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 100, height: 60 };
 * assertEquals(periodogramPanel({ x: [1, 2, 3], y: [0, 1, 0], best: 2 }, { frame }).name, "periodogram");
 * ```
 */
export function periodogramPanel(scan: Scan, options: PanelPlace): Group {
  return scanPanel(scan, {
    name: "periodogram",
    x_label: "frequency (d^{−1})",
    y_label: "power",
    ...options,
  });
}

/**
 * Draws the γ scan: how well a map made with each systemic velocity fits.
 *
 * @param scan Systemic velocities in km/s and the statistic.
 * @param options Place and the statistic's label.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { systemicScanPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const options = { frame: { x: 30, y: 10, width: 100, height: 60 }, y_label: "*χ*^{2}/*N*" };
 * assertEquals(systemicScanPanel({ x: [0, 20, 40], y: [2, 1, 2], best: 20 }, options).name, "systemic-scan");
 * ```
 */
export function systemicScanPanel(
  scan: Scan,
  options: PanelPlace & {
    /** Label of the statistic (markup of `labelRuns`). */
    readonly y_label: string;
  },
): Group {
  return scanPanel(scan, { name: "systemic-scan", x_label: `*γ* (${KMS_LABEL})`, ...options });
}

/**
 * Draws a scan of the period, as departures from the adopted period: its own digits would not fit on an axis.
 *
 * @param scan Periods in days and the statistic; its reference, or else its middle, is what departures count
 * from.
 * @param options Place and the statistic's label.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { periodScanPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const options = { frame: { x: 30, y: 10, width: 100, height: 60 }, y_label: "*χ*^{2}" };
 * const scan = { x: [0.0823, 0.0824, 0.0825], y: [2, 1, 2], best: 0.0824, reference: 0.08241 };
 * assertEquals(periodScanPanel(scan, options).name, "period-scan");
 * ```
 */
export function periodScanPanel(
  scan: Scan,
  options: PanelPlace & {
    /** Label of the statistic (markup of `labelRuns`). */
    readonly y_label: string;
  },
): Group {
  const { best = null, best_error = null, reference = null } = scan;
  const [first, last] = ends(scan.x);
  const middle = reference ?? (first + last) / 2;
  const exponent = Math.floor(Math.log10((last - first) / 2));
  const unit = 10 ** exponent;
  const from = (period: number | null) => period === null ? null : (period - middle) / unit;
  const digits = Math.max(0, 1 - exponent);
  return scanPanel({
    ...scan,
    x: Array.from(scan.x, (period) => (period - middle) / unit),
    best: from(best),
    best_error: best_error === null ? null : best_error / unit,
    reference: from(reference),
  }, {
    name: "period-scan",
    x_label: `*P* − ${middle.toFixed(digits)} (10^{${String(exponent).replace("-", "−")}} d)`,
    ...options,
  });
}

/** About how many ticks fit, at this distance or more. */
function tickCount(length_pt: number, distance_pt: number): number {
  return Math.max(3, Math.round(length_pt / distance_pt));
}

function ends(values: ArrayLike<number>): [number, number] {
  return [values[0] ?? 0, values[values.length - 1] ?? 1];
}
