import type { Sampling } from "../../trail/mod.ts";
import type { Box, Item } from "../display_list.ts";
import { linePath } from "../display_list.ts";
import { labelRuns } from "../runs.ts";
import { INK, NOTE_PT, QUIET } from "../style.ts";
import type { WindowShape } from "./map_window.ts";

const GAP_PT = 2;
const TICK_PT = 5;

/**
 * Draws the ring of exposures around a map's window: one tick per exposure, where the gas that
 * recedes fastest at its phase stands, which is the direction (−cos 2πφ, sin 2πφ) along which that
 * spectrum measures velocity. Phase 0 is at the left, 0.25 at the top. An arc joins the phases for
 * which the shutter was open.
 *
 * @param sampling Phases of the exposures and their widths.
 * @param options The map's window and its shape.
 * @returns Items that stand in the border outside the window.
 *
 * @example
 * ```ts
 * import { exposureRing } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = { count: 1, phase: Float64Array.of(0.25), phase_width: Float64Array.of(0.01) };
 * const window = { x: 20, y: 20, width: 100, height: 100 };
 * const [ticks] = exposureRing(sampling, { window });
 * assertEquals(ticks?.kind === "path" && ticks.d, "M70,18L70,13"); // straight up
 * ```
 */
export function exposureRing(
  sampling: Pick<Sampling, "count" | "phase" | "phase_width">,
  options: RingOptions,
): Item[] {
  const { window, shape = "round" } = options;
  const at = (phase: number, distance: number): [number, number] => {
    const u = -Math.cos(2 * Math.PI * phase);
    const v = Math.sin(2 * Math.PI * phase);
    const side = window.width / 2;
    const reach = shape === "round" ? side : side / Math.max(Math.abs(u), Math.abs(v));
    const x = window.x + side + (reach + distance) * u;
    const y = window.y + side - (reach + distance) * v;
    return [x, y];
  };
  let ticks = "";
  let arcs = "";
  for (let i = 0; i < sampling.count; i++) {
    const phase = sampling.phase[i]!;
    const half = sampling.phase_width[i]! / 2;
    ticks += linePath([at(phase, GAP_PT), at(phase, GAP_PT + TICK_PT)]);
    const steps = Math.max(1, Math.ceil(half * 180));
    arcs += linePath(Array.from({ length: 2 * steps + 1 }, (_, k) => {
      return at(phase + half * (k / steps - 1), GAP_PT);
    }));
  }
  return [
    { kind: "path", d: ticks, stroke: INK, stroke_pt: 0.6 },
    { kind: "path", d: arcs, stroke: QUIET, stroke_pt: 0.6 },
    ...[0, 0.25, 0.5, 0.75].map((phase) =>
      phaseLabel(phase, { at: at(phase, GAP_PT + TICK_PT + 2), small: window.width < 100 })
    ),
  ];
}

/** The window that a ring surrounds. */
export interface RingOptions {
  /** The map's window, pt. */
  readonly window: Box;
  /** Shape of the window. @default {"round"} */
  readonly shape?: WindowShape;
}

function phaseLabel(
  phase: number,
  options: { readonly at: readonly [number, number]; readonly small: boolean },
): Item {
  const { at: [x, y], small } = options;
  const style = { kind: "text", size_pt: NOTE_PT, fill: QUIET } as const;
  const runs = labelRuns(phase === 0.25 && !small ? "*φ* = 0.25" : String(phase));
  switch (phase) {
    case 0:
      return { ...style, x: x + 1, y: y + 2.4, anchor: "end", runs };
    case 0.25:
      return { ...style, x, y: y - 0.5, anchor: "middle", runs };
    case 0.5:
      return { ...style, x: x - 1, y: y + 2.4, runs };
    default:
      return { ...style, x, y: y + 5, anchor: "middle", runs };
  }
}
