import { axisTicks } from "../axes.ts";
import { type Box, boxPath, type Item, linePath } from "../display_list.ts";
import { labelRuns, roughWidth } from "../runs.ts";
import { HAIRLINE_PT, INK, NOTE_PT, QUIET } from "../style.ts";
import { COLOUR_COUNT, colourTable } from "./colour_map.ts";
import type { ColourScale } from "./colour_scale.ts";
import { stretched } from "./stretch.ts";

/** How a colour bar is labelled. */
export interface ColourBarOptions {
  /** Place of the bar itself, pt; its labels stand above it. */
  readonly box: Box;
  /** Unit or quantity in the markup of {@linkcode labelRuns}, written at the right end where it fits. */
  readonly unit?: string;
  /** Values are divided by this before they are written. @default {1} */
  readonly divide_by?: number;
  /** Values to write; the limits, and zero where it lies well between, when absent. */
  readonly ticks?: readonly number[];
}

/**
 * Draws a thin horizontal colour bar with its values above it.
 *
 * @param scale The colours and limits.
 * @param options Place, unit, values.
 * @returns Items.
 *
 * @example
 * ```ts
 * import { colourBar } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const box = { x: 0, y: 20, width: 100, height: 4 };
 * const items = colourBar({ limits: [-4, 4], map: "tide" }, { box, unit: "σ" });
 * const texts = items.flatMap((item) => item.kind === "text" ? [item.runs[0]!.text] : []);
 * assertEquals(texts, ["−4", "0", "4 σ"]);
 * ```
 */
export function colourBar(scale: ColourScale, options: ColourBarOptions): Item[] {
  const { box, unit, divide_by = 1, ticks = endTicks(scale) } = options;
  const rgb = colourTable(scale.map ?? "ink");
  const items: Item[] = [
    { kind: "image", ...box, columns: COLOUR_COUNT, rows: 1, rgb },
    { kind: "path", d: boxPath(box), stroke: QUIET, stroke_pt: HAIRLINE_PT },
  ];
  const [low, high] = scale.limits;
  const labels = axisTicks({
    range: [low / divide_by, high / divide_by],
    ticks: ticks.map((value) => value / divide_by),
    format: writeValue,
  });
  const fits = (end: string) => {
    const written = [...labels.map(({ text }) => text), end].join("  ");
    return roughWidth(labelRuns(written), NOTE_PT) < box.width;
  };
  // Where there is no room for the unit, the power of ten must still stand.
  const power = divide_by === 1 ? "" : `× 10^{${minus(Math.round(Math.log10(divide_by)))}}`;
  const end = unit !== undefined && fits(unit) ? unit : power;
  labels.forEach(({ text }, i) => {
    const part = stretched(ticks[i]!, scale);
    const x = box.x + part * box.width;
    if (part > 0 && part < 1) {
      const d = linePath([[x, box.y], [x, box.y + box.height]]);
      items.push({ kind: "path", d, stroke: QUIET, stroke_pt: HAIRLINE_PT });
    }
    const last = i === labels.length - 1 && end !== "";
    items.push({
      kind: "text",
      x,
      y: box.y - 2.5,
      size_pt: NOTE_PT,
      fill: INK,
      anchor: part <= 0.01 ? "start" : part >= 0.99 ? "end" : "middle",
      runs: labelRuns(last ? `${text} ${end}` : text),
    });
  });
  return items;
}

function endTicks(scale: ColourScale): number[] {
  const [low, high] = scale.limits;
  const zero = stretched(0, scale);
  return zero > 0.2 && zero < 0.8 ? [low, 0, high] : [low, high];
}

/** Up to three significant digits with a true minus sign. */
function writeValue(value: number): string {
  return minus(Number(value.toPrecision(3)));
}

function minus(value: number): string {
  return String(value).replace("-", "−");
}

/**
 * A power of ten that brings the larger limit to 0.1 … 1000, for labels such as "3.2 × 10⁻⁶".
 *
 * @param limits The limits of a scale.
 * @returns The exponent; 0 where no power is needed.
 *
 * @example
 * ```ts
 * import { tidyExponent } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(tidyExponent([0, 3.2e-6]), -6);
 * assertEquals(tidyExponent([-5, 40]), 0);
 * ```
 */
export function tidyExponent(limits: readonly [low: number, high: number]): number {
  const size = Math.max(Math.abs(limits[0]), Math.abs(limits[1]));
  return size === 0 || (size >= 0.1 && size < 1000) ? 0 : Math.floor(Math.log10(size));
}
