import type { Group } from "../display_list.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { ACCENT, INK } from "../style.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";

/** What trials of a null hypothesis gained, and what the data gain. */
export interface NullDistribution {
  /** The null hypothesis, as in "disc". */
  readonly null_name: string;
  /** The one it was weighed against, as in "disc + spot". */
  readonly against_name: string;
  /** Gain of χ² of each trial, N values. */
  readonly gains: ArrayLike<number>;
  /** Gain of χ² in the data. */
  readonly observed: number;
}

/** Gains below this are all the same: hardly any. */
const LEAST_GAIN = 0.1;
/** Where the data gain this many times what any trial did, the axis is one of powers of ten. */
const FAR = 3;

/**
 * Draws the gains of χ² in trials of a null hypothesis as a histogram, with the gain in the data.
 *
 * @param found The gains.
 * @param options Place.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { nullDistributionPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const found = { null_name: "disc", against_name: "disc + spot", gains: [1, 2, 2, 4], observed: 90 };
 * const frame = { x: 30, y: 10, width: 160, height: 90 };
 * assertEquals(nullDistributionPanel(found, { frame }).name, "null-distribution");
 * ```
 */
export function nullDistributionPanel(found: NullDistribution, options: PanelPlace): Group {
  const { frame, name = "null-distribution" } = options;
  const gains = Array.from(found.gains).filter(Number.isFinite);
  const most = Math.max(0, ...gains);
  const powers = found.observed > FAR * Math.max(most, LEAST_GAIN);
  const place = (gain: number) => powers ? Math.log10(Math.max(LEAST_GAIN, gain)) : gain;
  const places = gains.map(place);
  const observed = place(found.observed);
  const low = powers ? place(0) : Math.min(0, observed, ...places);
  const high = Math.max(observed, ...places);
  // Room on the right for the word beside the rule.
  const end = high + Math.max(0.22, 34 / frame.width) * (high - low || 1);
  const range = options.x_range ?? [low - 0.02 * (end - low), end] as const;
  const top = Math.max(low, ...places) - low || 1;
  const bins = Math.max(6, Math.min(24, Math.round(2 * Math.sqrt(gains.length))));
  const width = top / bins;
  const counts = new Array<number>(bins).fill(0);
  for (const at of places) counts[Math.min(bins - 1, Math.floor((at - low) / width))]!++;
  // An empty bin at either end lets the outer ones be seen whole.
  const x = Array.from({ length: bins + 2 }, (_, i) => low + (i - 0.5) * width);
  const y = [0, ...counts, 0];
  const layers: PlotLayer[] = [
    { kind: "line", x, y, steps: true, closed: true, fill: INK, width_pt: 0.7 },
    { kind: "rule", x: observed, colour: ACCENT, dash_pt: [], name: "observed" },
  ];
  const first = Math.ceil(low - 1e-9);
  const decades = Array.from(
    { length: Math.max(0, Math.floor(end) - first + 1) },
    (_, i) => first + i,
  );
  return plotPanel(layers, {
    frame,
    name,
    x: {
      range,
      label: "gain of *χ*^{2}",
      ticks: powers ? decades : Math.max(3, Math.round(frame.width / 36)),
      ...(powers ? { format: powerOfTen } : {}),
    },
    y: {
      range: options.y_range ?? [0, 1.12 * Math.max(1, ...counts)],
      label: "trials",
      ticks: Math.max(2, Math.min(Math.max(...counts), Math.round(frame.height / 22))),
    },
  });
}

/** Small powers in full, others as 10ⁿ; the lowest place holds all that is less. */
function powerOfTen(exponent: number): string {
  if (exponent <= Math.log10(LEAST_GAIN)) return `≤ ${LEAST_GAIN}`;
  return exponent <= 3 ? String(10 ** exponent) : `10^{${exponent}}`;
}
