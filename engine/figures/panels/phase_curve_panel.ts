import type { Box, Group } from "../display_list.ts";
import type { LineLayer, PlotLayer, PointsLayer } from "../plot_layer.ts";
import { NOTE_PT, SERIES } from "../style.ts";
import { layerRange, type PanelPlace, plotPanel } from "./plot_panel.ts";

/** A quantity measured along the orbit: equivalent width, V/R, continuum, velocity. */
export interface PhaseCurve {
  /** Name of the series (markup of `labelRuns`), written above the points where there are several. */
  readonly name?: string;
  /** Orbital phases in [0, 1), N values. */
  readonly phase: ArrayLike<number>;
  /** N values; NaN where not measured. */
  readonly value: ArrayLike<number>;
  /** One standard deviation, N values. */
  readonly error?: ArrayLike<number>;
  /** A model, drawn as a curve. */
  readonly model?: (phase: number) => number;
}

/** How phase curves are drawn. */
export interface PhaseCurveOptions extends PanelPlace {
  /** Label of the values (markup of `labelRuns`). */
  readonly label: string;
  /** Cycles shown from phase 0. @default {2} */
  readonly cycles?: number;
  /** True to leave out the label of the phases: a panel below shows it. @default {false} */
  readonly hide_phase?: boolean;
}

/**
 * Draws quantities against orbital phase over two cycles.
 *
 * @param curves One or more series.
 * @param options Place, label.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { phaseCurvePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 100, height: 60 };
 * const curve = { phase: [0.1, 0.6], value: [40, 44], error: [1, 1] };
 * assertEquals(phaseCurvePanel([curve], { frame, label: "width (Å)" }).name, "phase-curve");
 * ```
 */
export function phaseCurvePanel(
  curves: readonly PhaseCurve[],
  options: PhaseCurveOptions,
): Group {
  const { frame, label, cycles = 2, hide_phase = false, name = "phase-curve", y_range } = options;
  const layers = curves.flatMap((curve, i): PlotLayer[] => {
    const style = { cycles, colour: SERIES[i % SERIES.length]!, order: i };
    const line: LineLayer[] = curve.model ? [modelLine(curve.model, style)] : [];
    return [...line, repeated(curve, style)];
  });
  const range = y_range ?? layerRange(layers, "y");
  const named = curves.length > 1 ? curves.filter((curve) => curve.name !== undefined) : [];
  const above = nameBand(named, { range, frame, cycles, curves });
  return plotPanel([...layers, ...above.layers], {
    frame,
    name,
    x: {
      range: [0, cycles],
      ticks: Array.from({ length: 2 * cycles + 1 }, (_, i) => i / 2),
      ...(hide_phase
        ? { format: null }
        : { label: "orbital phase", format: (phase) => phase.toFixed(1) }),
    },
    y: {
      label,
      ticks: Math.max(3, Math.round(frame.height / 22)),
      range: above.range,
    },
  });
}

/** Height of a line of names above the points, pt. */
const LINE_PT = 1.3 * NOTE_PT;

/** Names in a band of their own above the points, each behind a mark of its series. */
function nameBand(
  named: readonly PhaseCurve[],
  options: {
    readonly range: readonly [number, number];
    readonly frame: Box;
    readonly cycles: number;
    readonly curves: readonly PhaseCurve[];
  },
): { readonly range: readonly [number, number]; readonly layers: readonly PlotLayer[] } {
  const { range: [low, high], frame, cycles, curves } = options;
  const band = named.length === 0 ? 0 : LINE_PT * named.length + 2;
  if (band === 0 || band > 0.5 * frame.height) return { range: [low, high], layers: [] };
  const top = low + (high - low) * frame.height / (frame.height - band);
  const x_unit = cycles / frame.width;
  const y_unit = (top - low) / frame.height;
  const layers = named.flatMap((curve, i): PlotLayer[] => {
    const order = curves.indexOf(curve);
    const y = top - (LINE_PT * (i + 0.5) + 1) * y_unit;
    const colour = SERIES[order % SERIES.length]!;
    const shape = SHAPES[order % SHAPES.length]!;
    return [
      { kind: "points", x: [6 * x_unit], y: [y], colour, shape },
      {
        kind: "note",
        x: 10 * x_unit,
        y: y - 0.34 * NOTE_PT * y_unit,
        text: curve.name!,
        colour,
      },
    ];
  });
  return { range: [low, top], layers };
}

const SHAPES = ["dot", "open", "diamond", "square"] as const;

interface SeriesStyle {
  readonly cycles: number;
  readonly colour: string;
  readonly order: number;
}

/** A model as a curve over all cycles. */
function modelLine(model: (phase: number) => number, style: SeriesStyle): LineLayer {
  const x = Array.from({ length: 100 * style.cycles + 1 }, (_, i) => i / 100);
  return { kind: "line", x, y: x.map((phase) => model(phase % 1)), colour: style.colour };
}

/** Points of a series, shown again in each cycle. */
function repeated(curve: PhaseCurve, style: SeriesStyle): PointsLayer {
  const { cycles, colour, order } = style;
  const again = (values: ArrayLike<number>, step: number) =>
    Array.from({ length: cycles }, (_, cycle) => Array.from(values, (v) => v + cycle * step))
      .flat();
  return {
    kind: "points",
    x: again(curve.phase, 1),
    y: again(curve.value, 0),
    ...(curve.error ? { y_error: again(curve.error, 0) } : {}),
    colour,
    shape: SHAPES[order % SHAPES.length]!,
  };
}
