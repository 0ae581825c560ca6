import { boxPath, type Item, linePath, type TextItem } from "./display_list.ts";
import type { PlotPlace } from "./axes.ts";
import { labelRuns, plainRuns } from "./runs.ts";
import { CURVE_PT, HAIRLINE_PT, INK, NOTE_PT, PAPER, QUIET } from "./style.ts";

/** A curve through points. */
export interface LineLayer {
  /** Tells the kind of layer. */
  readonly kind: "line";
  /** N values; one that is not finite breaks the curve. */
  readonly x: ArrayLike<number>;
  /** N values. */
  readonly y: ArrayLike<number>;
  /** Colour. @default {INK} */
  readonly colour?: string;
  /** Width, pt. @default {0.9} */
  readonly width_pt?: number;
  /** Dashes and gaps, pt. */
  readonly dash_pt?: readonly number[];
  /** True for a histogram: each value holds half-way to its neighbours. @default {false} */
  readonly steps?: boolean;
  /** True to join the last point to the first. @default {false} */
  readonly closed?: boolean;
  /** Fills the inside of a closed curve. */
  readonly fill?: string;
  /** Name (markup of `labelRuns`) written over its right end. */
  readonly name?: string;
}

/** Measured points with their errors. */
export interface PointsLayer {
  /** Tells the kind of layer. */
  readonly kind: "points";
  /** N values. */
  readonly x: ArrayLike<number>;
  /** N values. */
  readonly y: ArrayLike<number>;
  /** One standard deviation of x, N values. */
  readonly x_error?: ArrayLike<number>;
  /** One standard deviation of y, N values. */
  readonly y_error?: ArrayLike<number>;
  /** Colour. @default {INK} */
  readonly colour?: string;
  /** Shape of a point; the open one is paper inside. @default {"dot"} */
  readonly shape?: "dot" | "open" | "diamond" | "square";
  /** Radius, pt. @default {1.6} */
  readonly radius_pt?: number;
  /** Name (markup of `labelRuns`) written over its right end. */
  readonly name?: string;
}

/** The area between two curves: what is uncertain or allowed. */
export interface BandLayer {
  /** Tells the kind of layer. */
  readonly kind: "band";
  /** N values. */
  readonly x: ArrayLike<number>;
  /** N values. */
  readonly low: ArrayLike<number>;
  /** N values. */
  readonly high: ArrayLike<number>;
  /** Colour. @default {INK} */
  readonly colour?: string;
  /** Opacity. @default {0.16} */
  readonly opacity?: number;
}

/** A straight line across the plot at one value, with a note. */
export interface RuleLayer {
  /** Tells the kind of layer. */
  readonly kind: "rule";
  /** Value of x for an upright line. */
  readonly x?: number;
  /** Value of y for a level line. */
  readonly y?: number;
  /** Colour. @default {QUIET} */
  readonly colour?: string;
  /** Dashes and gaps, pt. @default {[2, 2]} */
  readonly dash_pt?: readonly number[];
  /** Note (markup of `labelRuns`) at its upper or right end. */
  readonly name?: string;
}

/** A word in the plot. */
export interface NoteLayer {
  /** Tells the kind of layer. */
  readonly kind: "note";
  /** Value of x. */
  readonly x: number;
  /** Value of y. */
  readonly y: number;
  /** The word; in the markup of `labelRuns` unless `plain`. */
  readonly text: string;
  /** True to write every character as it is. @default {false} */
  readonly plain?: boolean;
  /** Which part stands at the place. @default {"start"} */
  readonly anchor?: TextItem["anchor"];
  /** Turn, degrees. @default {0} */
  readonly rotate_deg?: number;
  /** Colour. @default {INK} */
  readonly colour?: string;
  /** Width of bare paper under the word, for a word in the middle of a curve, pt. @default {0} */
  readonly paper_pt?: number;
}

/** A part of a plot. */
export type PlotLayer = LineLayer | PointsLayer | BandLayer | RuleLayer | NoteLayer;

/**
 * Draws a layer.
 *
 * @param layer What is drawn.
 * @param place Where values stand, and the ends of the axes.
 * @returns Items; words among them are to be drawn after every layer's lines.
 *
 * @example
 * ```ts
 * import { drawLayer, plotPlace } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const range = [0, 10] as const;
 * const place = plotPlace({ x: 0, y: 0, width: 10, height: 10 }, { x: { range }, y: { range } });
 * const items = drawLayer({ kind: "line", x: [0, 10], y: [0, 10] }, { ...place, x_range: range, y_range: range });
 * assertEquals(items[0]?.kind === "path" && items[0].d, "M0,10L10,0");
 * ```
 */
export function drawLayer(layer: PlotLayer, place: LayerPlace): Item[] {
  switch (layer.kind) {
    case "line":
      return drawLine(layer, place);
    case "points":
      return drawPoints(layer, place);
    case "band":
      return drawBand(layer, place);
    case "rule":
      return drawRule(layer, place);
    case "note":
      return drawNote(layer, place);
  }
}

/** Where a layer's values stand, with the ranges shown. */
export interface LayerPlace extends PlotPlace {
  /** Values at the left and the right end. */
  readonly x_range: readonly [from: number, to: number];
  /** Values at the lower and the upper end. */
  readonly y_range: readonly [from: number, to: number];
}

function nameAt(name: string | undefined, at: { x: number; y: number }, colour: string): Item[] {
  if (name === undefined || !Number.isFinite(at.x)) return [];
  const style = { kind: "text", size_pt: NOTE_PT, fill: colour, halo: PAPER } as const;
  return [{ ...style, x: at.x - 1, y: at.y - 4, anchor: "end", runs: labelRuns(name) }];
}

function drawLine(layer: LineLayer, place: LayerPlace): Item[] {
  const { colour = INK, width_pt = CURVE_PT, dash_pt, steps, closed, fill, name } = layer;
  let points = Array.from(layer.x, (x, i) => [place.x(x), place.y(layer.y[i]!)] as const);
  if (steps) points = stairs(points);
  const paint = {
    stroke: colour,
    stroke_pt: width_pt,
    ...(dash_pt ? { dash_pt } : {}),
    ...(fill ? { fill, fill_opacity: 0.16 } : {}),
  };
  const path: Item = { kind: "path", d: linePath(points, closed), ...paint };
  const end = rightmost(points.map(([x, y]) => ({ x, y })));
  return [path, ...nameAt(name, end, colour)];
}

/** The finite point farthest to the right. */
function rightmost(points: readonly { x: number; y: number }[]): { x: number; y: number } {
  return points.reduce((best, point) => {
    return Number.isFinite(point.x + point.y) && point.x > best.x ? point : best;
  }, { x: -Infinity, y: 0 });
}

function stairs(points: readonly (readonly [number, number])[]) {
  return points.flatMap(([x, y], i) => {
    const before = points[i - 1]?.[0] ?? x;
    const after = points[i + 1]?.[0] ?? x;
    return [[(before + x) / 2, y] as const, [(x + after) / 2, y] as const];
  });
}

function drawPoints(layer: PointsLayer, place: LayerPlace): Item[] {
  const { x_error, y_error, colour = INK, shape = "dot", radius_pt = 1.6, name } = layer;
  let bars = "";
  let marks = "";
  const seen: { x: number; y: number }[] = [];
  for (let i = 0; i < layer.x.length; i++) {
    const x = place.x(layer.x[i]!);
    const y = place.y(layer.y[i]!);
    if (!Number.isFinite(x) || !Number.isFinite(y)) continue;
    const ey = y_error?.[i] ?? 0;
    const ex = x_error?.[i] ?? 0;
    const at = [layer.x[i]!, layer.y[i]!] as const;
    if (ey > 0 && ey < Infinity) {
      bars += linePath([[x, place.y(at[1] - ey)], [x, place.y(at[1] + ey)]]);
    }
    if (ex > 0 && ex < Infinity) {
      bars += linePath([[place.x(at[0] - ex), y], [place.x(at[0] + ex), y]]);
    }
    marks += mark(shape, x, y, radius_pt);
    seen.push({ x, y });
  }
  const fill = shape === "open" ? PAPER : colour;
  return [
    { kind: "path", d: bars, stroke: colour, stroke_pt: HAIRLINE_PT },
    { kind: "path", d: marks, fill, stroke: colour, stroke_pt: HAIRLINE_PT },
    ...nameAt(name, rightmost(seen), colour),
  ];
}

function mark(shape: NonNullable<PointsLayer["shape"]>, x: number, y: number, r: number): string {
  if (shape === "square") {
    return linePath([[x - r, y - r], [x + r, y - r], [x + r, y + r], [x - r, y + r]], true);
  }
  if (shape === "diamond") {
    const s = 1.35 * r;
    return linePath([[x, y - s], [x + s, y], [x, y + s], [x - s, y]], true);
  }
  const sides = 12; // a circle at this size
  return linePath(
    Array.from({ length: sides }, (_, i) => {
      const angle = 2 * Math.PI * i / sides;
      return [x + r * Math.cos(angle), y + r * Math.sin(angle)] as const;
    }),
    true,
  );
}

function drawBand(layer: BandLayer, place: LayerPlace): Item[] {
  const { colour = INK, opacity = 0.16 } = layer;
  const n = layer.x.length;
  const edge = (values: ArrayLike<number>, i: number) =>
    [place.x(layer.x[i]!), place.y(values[i]!)] as const;
  const points = [
    ...Array.from({ length: n }, (_, i) => edge(layer.low, i)),
    ...Array.from({ length: n }, (_, i) => edge(layer.high, n - 1 - i)),
  ];
  return [{ kind: "path", d: linePath(points, true), fill: colour, fill_opacity: opacity }];
}

function drawRule(layer: RuleLayer, place: LayerPlace): Item[] {
  const { x, y, colour = QUIET, dash_pt = [2, 2], name } = layer;
  const [x0, x1] = place.x_range.map(place.x) as [number, number];
  const [y0, y1] = place.y_range.map(place.y) as [number, number];
  const paint = { stroke: colour, stroke_pt: 0.7, dash_pt };
  const items: Item[] = [];
  const word = { kind: "text", size_pt: NOTE_PT, fill: colour, halo: PAPER } as const;
  if (x !== undefined) {
    const at = place.x(x);
    items.push({ kind: "path", d: linePath([[at, y0], [at, y1]]), ...paint });
    if (name) items.push({ ...word, x: at + 2.5, y: y1 + 8, runs: labelRuns(name) });
  }
  if (y !== undefined) {
    const at = place.y(y);
    items.push({ kind: "path", d: linePath([[x0, at], [x1, at]]), ...paint });
    if (name) items.push({ ...word, x: x1 - 3, y: at - 2.5, anchor: "end", runs: labelRuns(name) });
  }
  return items;
}

function drawNote(layer: NoteLayer, place: LayerPlace): Item[] {
  const { text, plain, anchor = "start", rotate_deg = 0, colour = INK, paper_pt = 0 } = layer;
  const [x, y] = [place.x(layer.x), place.y(layer.y)];
  const under = { x: x - paper_pt / 2, y: y - 0.84 * NOTE_PT, width: paper_pt, height: NOTE_PT };
  const paper: Item[] = paper_pt === 0
    ? []
    : [{ kind: "path", d: boxPath(under), fill: PAPER, fill_opacity: 0.85 }];
  return [...paper, {
    kind: "text",
    x,
    y,
    size_pt: NOTE_PT,
    fill: colour,
    halo: PAPER,
    anchor,
    rotate_deg,
    runs: plain ? plainRuns(text) : labelRuns(text),
  }];
}
