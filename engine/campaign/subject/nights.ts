import type { Trail, TrailGrid } from "../../trail/mod.ts";

/** A cloud lasts less, a day more. */
const GAP_D = 0.25;

/**
 * Night of each exposure, from 0: gaps of more than six hours part them.
 *
 * @param sampling Cycles and phases of the exposures, in order of time.
 * @param options The period.
 * @param options.period_d Period, d.
 * @returns One number an exposure.
 */
export function nightsOf(
  sampling: Pick<Trail["sampling"], "cycle" | "phase">,
  options: { period_d: number },
): number[] {
  const { cycle, phase } = sampling;
  const least = GAP_D / options.period_d;
  let night = 0;
  return Array.from(phase, (_, i) => {
    const gap = i === 0 ? 0 : cycle[i]! + phase[i]! - cycle[i - 1]! - phase[i - 1]!;
    if (gap > least) night++;
    return night;
  });
}

/**
 * Some rows of a display grid.
 *
 * @param grid The grid.
 * @param keep Which rows.
 * @returns A grid of these rows alone.
 */
export function rowsOf(grid: TrailGrid, keep: (row: number) => boolean): TrailGrid {
  const rows = Array.from({ length: grid.rows }, (_, row) => row).filter(keep);
  const pick = (values: Float64Array, stride: number) => {
    const out = new Float64Array(rows.length * stride);
    rows.forEach((row, i) =>
      out.set(values.subarray(row * stride, (row + 1) * stride), i * stride)
    );
    return out;
  };
  return {
    ...grid,
    rows: rows.length,
    phase: pick(grid.phase, 1),
    phase_width: pick(grid.phase_width, 1),
    flux: pick(grid.flux, grid.columns),
    error: pick(grid.error, grid.columns),
    covariance_next: pick(grid.covariance_next, grid.columns),
  };
}
