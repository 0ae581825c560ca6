import type { TrailGrid } from "../../trail/mod.ts";
import type { Grid } from "../colour/colour_scale.ts";

/** What a figure needs of a trail's display grid. */
export type DisplayGrid = Pick<
  TrailGrid,
  "rows" | "columns" | "first_kms" | "step_kms" | "phase" | "phase_width" | "flux" | "error"
>;

/** How rows of a trail are laid over phase. */
export interface FoldOptions {
  /** Values, R × C on the trail's grid, NaN where there are none; the grid's flux when absent. */
  readonly values?: Float64Array;
  /** Number of cycles drawn, from phase 0. @default {2} */
  readonly cycles?: number;
  /** Steps of phase in a cycle. @default {240} */
  readonly steps?: number;
  /** A gap between exposures shorter than this part of their length (read-out) is closed. @default {0.5} */
  readonly close_gap?: number;
}

/**
 * Lays a trail over phase, each exposure where it truly was: its row covers the phases it was open.
 * Where several cover one phase their mean is taken, weighted by inverse variance; where none does,
 * the phase is left blank.
 *
 * @param grid The trail's grid.
 * @param options Values, cycles, steps of phase.
 * @returns cycles·steps × C values from phase 0 upwards, NaN where nothing was observed.
 *
 * @example
 * ```ts
 * import { foldedGrid } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const grid = {
 *   rows: 1, columns: 1, first_kms: 0, step_kms: 1,
 *   phase: Float64Array.of(0.5), phase_width: Float64Array.of(0.5),
 *   flux: Float64Array.of(3), error: Float64Array.of(1),
 * };
 * assertEquals([...foldedGrid(grid, { cycles: 1, steps: 4 }).values as Float64Array], [NaN, 3, 3, NaN]);
 * ```
 */
export function foldedGrid(grid: DisplayGrid, options: FoldOptions = {}): Grid {
  const { values = grid.flux, cycles = 2, steps = 240, close_gap = 0.5 } = options;
  const { rows, columns, error } = grid;
  const sum = new Float64Array(steps * columns);
  const weights = new Float64Array(steps * columns);
  const spans = rowSpans(grid, close_gap);
  for (let row = 0; row < rows; row++) {
    const [low, high] = spans[row]!;
    // A step belongs to a row when its middle lies within the row.
    for (let s = Math.ceil(low * steps - 0.5); (s + 0.5) / steps < high; s++) {
      const to = (((s % steps) + steps) % steps) * columns;
      for (let column = 0; column < columns; column++) {
        const from = row * columns + column;
        const value = values[from]!;
        const weight = 1 / error[from]! ** 2;
        if (!Number.isFinite(value) || !(weight > 0)) continue;
        sum[to + column]! += weight * value;
        weights[to + column]! += weight;
      }
    }
  }
  const folded = new Float64Array(cycles * steps * columns);
  for (let i = 0; i < folded.length; i++) {
    const at = i % sum.length;
    folded[i] = weights[at] === 0 ? NaN : sum[at]! / weights[at]!;
  }
  return { rows: cycles * steps, columns, values: folded };
}

/** Phases that each row covers, short gaps to its neighbours closed. */
function rowSpans(grid: DisplayGrid, close_gap: number): [low: number, high: number][] {
  const { rows, phase, phase_width } = grid;
  const order = Array.from({ length: rows }, (_, i) => i).sort((a, b) => phase[a]! - phase[b]!);
  const spans = Array.from({ length: rows }, (_, i): [number, number] => {
    const half = phase_width[i]! / 2;
    return [phase[i]! - half, phase[i]! + half];
  });
  order.forEach((row, k) => {
    const wraps = k + 1 === rows;
    const next = order[wraps ? 0 : k + 1]!;
    const turn = wraps ? 1 : 0;
    const gap = spans[next]![0] + turn - spans[row]![1];
    const shorter = Math.min(phase_width[row]!, phase_width[next]!);
    if (gap <= 0 || gap > close_gap * shorter) return;
    spans[row]![1] += gap / 2;
    spans[next]![0] -= gap / 2;
  });
  return spans;
}
