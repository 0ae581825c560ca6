import { type PlotPlace, plotPlace } from "../axes.ts";
import type { Box } from "../display_list.ts";
import { textWidth } from "../fonts.ts";
import type { NoteLayer } from "../plot_layer.ts";
import { labelRuns } from "../runs.ts";
import { INK, NOTE_PT } from "../style.ts";

/** A curve to be named where it runs. */
export interface NamedCurve {
  /** Name (markup of `labelRuns`). */
  readonly name: string;
  /** N values. */
  readonly x: ArrayLike<number>;
  /** N values. */
  readonly y: ArrayLike<number>;
}

/** Distance between the places that are tried along a curve, pt. */
const STEP_PT = 3;
/** Distance that names keep from one another and from the frame, pt. */
const CLEAR_PT = 2;

/**
 * Names curves on the curves themselves: each as near its last point within the frame as leaves it
 * clear of the frame, of the names before it and of the areas to be kept free. A curve that has no
 * such place stays without a name.
 *
 * @param curves The curves, those that matter most first.
 * @param options The frame, the ranges shown, areas to be kept free.
 * @returns Notes in the plot's own values.
 *
 * @example
 * ```ts
 * import { curveNames } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 0, y: 0, width: 100, height: 100 };
 * const options = { frame, x_range: [0, 1], y_range: [0, 1] } as const;
 * const rising = { name: "up", x: [0, 2], y: [0, 2] }; // leaves the frame at its corner
 * const [note] = curveNames([rising, { ...rising, name: "over it" }], options);
 * assertEquals(note?.text, "up");
 * assertEquals(note!.x > 0.8 && note!.x < 1, true);
 * ```
 */
export function curveNames(
  curves: readonly NamedCurve[],
  options: {
    /** The plotting area, pt. */
    readonly frame: Box;
    /** Values at the left and the right end. */
    readonly x_range: readonly [from: number, to: number];
    /** Values at the lower and the upper end. */
    readonly y_range: readonly [from: number, to: number];
    /** Areas without names, pt. @default {[]} */
    readonly free?: readonly Box[];
  },
): NoteLayer[] {
  const { frame, x_range, y_range, free = [] } = options;
  const place = plotPlace(frame, { x: { range: x_range }, y: { range: y_range } });
  const taken = [...free];
  return curves.flatMap((curve): NoteLayer[] => {
    const width = textWidth(labelRuns(curve.name), NOTE_PT);
    for (const [x, y] of places(curve, place)) {
      const box = { x: x - width / 2, y: y - NOTE_PT / 2, width, height: NOTE_PT };
      if (!within(box, frame) || taken.some((other) => touch(box, other))) continue;
      taken.push(box);
      const share = [
        (x - frame.x) / frame.width,
        (frame.y + frame.height - y - 0.34 * NOTE_PT) / frame.height,
      ] as const;
      return [{
        kind: "note",
        x: x_range[0] + share[0] * (x_range[1] - x_range[0]),
        y: y_range[0] + share[1] * (y_range[1] - y_range[0]),
        text: curve.name,
        anchor: "middle",
        colour: INK,
        paper_pt: width + 2,
      }];
    }
    return [];
  });
}

/** Places along a curve, even on the page, from its end. */
function* places(curve: NamedCurve, place: PlotPlace): Generator<readonly [number, number]> {
  for (let i = curve.x.length - 1; i > 0; i--) {
    const from = [place.x(curve.x[i]!), place.y(curve.y[i]!)] as const;
    const to = [place.x(curve.x[i - 1]!), place.y(curve.y[i - 1]!)] as const;
    const length = Math.hypot(to[0] - from[0], to[1] - from[1]);
    if (!Number.isFinite(length)) continue;
    const steps = Math.min(2000, Math.max(1, Math.ceil(length / STEP_PT)));
    for (let k = 0; k < steps; k++) {
      const t = k / steps;
      yield [from[0] + t * (to[0] - from[0]), from[1] + t * (to[1] - from[1])];
    }
  }
}

function within(box: Box, frame: Box): boolean {
  return box.x >= frame.x + CLEAR_PT && box.y >= frame.y + CLEAR_PT &&
    box.x + box.width <= frame.x + frame.width - CLEAR_PT &&
    box.y + box.height <= frame.y + frame.height - CLEAR_PT;
}

function touch(a: Box, b: Box): boolean {
  return a.x < b.x + b.width + CLEAR_PT && b.x < a.x + a.width + CLEAR_PT &&
    a.y < b.y + b.height + CLEAR_PT && b.y < a.y + a.height + CLEAR_PT;
}
