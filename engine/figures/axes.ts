import { scaleLinear } from "d3-scale";
import { type Box, boxPath, type Item, linePath, type TextItem } from "./display_list.ts";
import { labelRuns } from "./runs.ts";
import { HAIRLINE_PT, INK, LABEL_PT, QUIET, TICK_PT } from "./style.ts";

/** One axis of a plot. */
export interface Axis {
  /** Values at its two ends: left and right, or bottom and top. */
  readonly range: readonly [from: number, to: number];
  /** Label in the markup of {@linkcode labelRuns}; none when absent. */
  readonly label?: string;
  /** Place of the middle of a horizontal axis' label, pt; that of the frame when absent. */
  readonly label_x?: number;
  /** Values with ticks, or about how many there should be. @default {5} */
  readonly ticks?: readonly number[] | number;
  /** Writes a tick's value; null writes none. */
  readonly format?: ((value: number) => string) | null;
}

/**
 * Place of a value along an axis.
 *
 * @param value The value.
 * @param axis The axis and the two places of its ends, pt.
 * @returns Its place, pt; not clipped.
 *
 * @example
 * ```ts
 * import { along } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(along(5, { range: [0, 10], from: 100, to: 0 }), 50);
 * ```
 */
export function along(value: number, axis: AxisPlace): number {
  const { range: [low, high], from, to } = axis;
  return from + (to - from) * (value - low) / (high - low);
}

/** An axis laid out on the page. */
export interface AxisPlace {
  /** Values at its two ends. */
  readonly range: readonly [from: number, to: number];
  /** Place of the first end, pt. */
  readonly from: number;
  /** Place of the second end, pt. */
  readonly to: number;
}

/** Where a plot's values stand on the page. */
export interface PlotPlace {
  /** Place of an x value, pt. */
  x(value: number): number;
  /** Place of a y value, pt. */
  y(value: number): number;
}

/**
 * Places of values in a frame: x to the right, y upwards.
 *
 * @param frame The plotting area.
 * @param axes Ranges of the two axes.
 * @returns The two mappings.
 *
 * @example
 * ```ts
 * import { plotPlace } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 10, y: 20, width: 100, height: 50 };
 * const place = plotPlace(frame, { x: { range: [0, 1] }, y: { range: [0, 1] } });
 * assertEquals([place.x(0), place.y(0)], [10, 70]); // bottom left
 * ```
 */
export function plotPlace(frame: Box, axes: PlotAxes): PlotPlace {
  const { x, y, width, height } = frame;
  return {
    x: (value) => along(value, { range: axes.x.range, from: x, to: x + width }),
    y: (value) => along(value, { range: axes.y.range, from: y + height, to: y }),
  };
}

/** The two axes of a plot. */
export interface PlotAxes {
  /** Horizontal axis. */
  readonly x: Axis;
  /** Vertical axis. */
  readonly y: Axis;
}

/** Ticks of an axis and what is written at them. */
export interface Tick {
  /** Value at the tick. */
  readonly value: number;
  /** What is written; empty for none. */
  readonly text: string;
}

/**
 * Ticks of an axis at round values within its range.
 *
 * @param axis The axis.
 * @returns Ticks in order.
 *
 * @example
 * ```ts
 * import { axisTicks } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(axisTicks({ range: [-1000, 1000], ticks: 2 }).map((tick) => tick.text), [
 *   "−1000",
 *   "0",
 *   "1000",
 * ]);
 * ```
 */
export function axisTicks(axis: Axis): Tick[] {
  const { range, ticks = 5, format } = axis;
  const scale = scaleLinear().domain([...range]);
  const [low, high] = [Math.min(...range), Math.max(...range)];
  const inside = (value: number) => value >= low && value <= high;
  const values = typeof ticks === "number" ? scale.ticks(ticks) : ticks.filter(inside);
  const whole = values.every(Number.isInteger);
  const count = typeof ticks === "number" ? ticks : values.length;
  // Without "d" whole numbers would get thousands commas.
  const chosen = whole ? scale.tickFormat(count, "d") : scale.tickFormat(count, undefined);
  const write = format === null ? () => "" : format ?? (typeof ticks === "number" ? chosen : exact);
  return values.map((value) => ({ value, text: write(value) }));
}

/** Every digit of a value that was asked for, with a true minus sign. */
function exact(value: number): string {
  return String(Number(value.toPrecision(6))).replace("-", "−");
}

const TICK_LENGTH = 3;

/** Where the axes of a frame stand and what is left out. */
export interface AxesOptions extends PlotAxes {
  /** Distance of the two axis lines from the frame, pt. @default {0} */
  readonly offset_pt?: number;
  /** True to draw the whole frame, false for the left and bottom lines alone. @default {true} */
  readonly boxed?: boolean;
  /** Distance of the y label's baseline from the axis, pt. @default {28} */
  readonly label_gap_pt?: number;
}

/**
 * Draws the frame, ticks and labels of a plot, all outside the frame.
 *
 * @param frame The plotting area.
 * @param options The axes.
 * @returns Items to draw over the plot.
 *
 * @example
 * ```ts
 * import { drawAxes } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const frame = { x: 40, y: 10, width: 100, height: 50 };
 * const items = drawAxes(frame, { x: { range: [0, 2], label: "phase" }, y: { range: [0, 1] } });
 * assert(items.some((item) => item.kind === "text" && item.runs[0]?.text === "phase"));
 * ```
 */
export function drawAxes(frame: Box, options: AxesOptions): Item[] {
  const { offset_pt = 0, boxed = true, label_gap_pt = 28 } = options;
  const place = plotPlace(frame, options);
  const left = frame.x - offset_pt;
  const bottom = frame.y + frame.height + offset_pt;
  let d = "";
  const items: Item[] = [];
  const text = (item: Omit<TextItem, "kind" | "runs">, label: string) =>
    items.push({ kind: "text", fill: INK, ...item, runs: labelRuns(label) });
  const xTicks = spacedTicks(options.x, { length_pt: frame.width, room: beside });
  const yTicks = spacedTicks(options.y, { length_pt: frame.height, room: stacked });
  for (const { value, text: label } of xTicks) {
    const x = place.x(value);
    d += linePath([[x, bottom], [x, bottom + TICK_LENGTH]]);
    if (label !== "") {
      text(
        { x, y: bottom + TICK_LENGTH + 0.95 * TICK_PT, size_pt: TICK_PT, anchor: "middle" },
        label,
      );
    }
  }
  for (const { value, text: label } of yTicks) {
    const y = place.y(value);
    d += linePath([[left, y], [left - TICK_LENGTH, y]]);
    const at = { x: left - TICK_LENGTH - 2, y: y + 0.34 * TICK_PT };
    if (label !== "") text({ ...at, size_pt: TICK_PT, anchor: "end" }, label);
  }
  if (boxed) d += boxPath(frame);
  else {
    // Each line spans its ticks alone: it states the range that it measures.
    d += lineBetween(xTicks.map(({ value }) => [place.x(value), bottom]));
    d += lineBetween(yTicks.map(({ value }) => [left, place.y(value)]));
  }
  items.unshift({ kind: "path", d, stroke: QUIET, stroke_pt: HAIRLINE_PT });
  if (options.x.label !== undefined) {
    const y = bottom + TICK_LENGTH + TICK_PT + 1.2 * LABEL_PT;
    const x = options.x.label_x ?? frame.x + frame.width / 2;
    text({ x, y, size_pt: LABEL_PT, anchor: "middle" }, options.x.label);
  }
  if (options.y.label !== undefined) {
    const at = { x: left - label_gap_pt, y: frame.y + frame.height / 2 };
    text({ ...at, size_pt: LABEL_PT, anchor: "middle", rotate_deg: -90 }, options.y.label);
  }
  return items;
}

/**
 * Ticks whose values keep clear of one another, fewer than asked for where they must be.
 *
 * @param axis The axis.
 * @param options Its length on the page, and the room that two neighbouring values need.
 */
function spacedTicks(
  axis: Axis,
  options: { readonly length_pt: number; readonly room: (a: string, b: string) => number },
): Tick[] {
  const { range: [from, to], ticks = 5 } = axis;
  let made = axisTicks(axis);
  if (typeof ticks !== "number") return made;
  const clear = () =>
    made.every(({ value, text }, i) => {
      const next = made[i + 1];
      if (next === undefined) return true;
      const distance = Math.abs((next.value - value) / (to - from)) * options.length_pt;
      return distance >= options.room(text, next.text);
    });
  for (let count = ticks - 1; count >= 1 && !clear(); count--) {
    made = axisTicks({ ...axis, ticks: count });
  }
  return made;
}

/** Room between the middles of two values side by side: digits are half as wide as they are high. */
const beside = (a: string, b: string) => 0.5 * TICK_PT * ((a.length + b.length) / 2 + 1);
/** The same for values one above the other. */
const stacked = () => 1.1 * TICK_PT;

function lineBetween(points: readonly [x: number, y: number][]): string {
  const first = points[0];
  const last = points.at(-1);
  return first && last ? linePath([first, last]) : "";
}
