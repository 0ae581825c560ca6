import { median } from "../numerics/mod.ts";
import { pixelEdges } from "./pixel_edges.ts";
import { rebin } from "./rebin.ts";
import type { Sampling } from "./sampling.ts";
import type { TrailGrid } from "./trail.ts";

/** Options of {@linkcode makeGrid}. */
export interface GridOptions {
  /** Velocities shown on either side of zero, km/s. */
  readonly reach_kms: number;
  /**
   * Bin width, km/s.
   * @default the median native pixel
   */
  readonly step_kms?: number;
  /**
   * Number of phase bins; 0 gives every exposure its row.
   * @default 0
   */
  readonly phase_bins?: number;
}

interface Row {
  readonly phase: number;
  readonly phase_width: number;
  readonly flux: Float64Array;
  readonly error: Float64Array;
  readonly covariance: Float64Array;
}

// One weight a row, not a sample: weights from single errors would favour samples that fell low.
function average(rows: readonly Row[], phase: number, bin_width: number): Row {
  const columns = rows[0]!.flux.length;
  const weight = rows.map((row) => {
    const errors = row.error.filter((e) => Number.isFinite(e));
    return errors.length === 0 ? 0 : 1 / median(errors) ** 2;
  });
  const flux = new Float64Array(columns).fill(NaN);
  const error = new Float64Array(columns).fill(Infinity);
  const covariance = new Float64Array(columns);
  const total = new Float64Array(columns);
  rows.forEach((row, r) => row.error.forEach((e, j) => total[j]! += e < Infinity ? weight[r]! : 0));
  for (let j = 0; j < columns; j++) {
    if (!(total[j]! > 0)) continue;
    let sum = 0, variance = 0;
    rows.forEach((row, r) => {
      if (!Number.isFinite(row.error[j]!)) return;
      const w = weight[r]! / total[j]!;
      sum += w * row.flux[j]!;
      variance += (w * row.error[j]!) ** 2;
      if (total[j + 1]! > 0) covariance[j]! += w * weight[r]! / total[j + 1]! * row.covariance[j]!;
    });
    flux[j] = sum;
    error[j] = Math.sqrt(variance);
  }
  const width = rows.reduce((sum, row) => sum + row.phase_width ** 2, 0) / rows.length;
  return { phase, phase_width: Math.hypot(bin_width, Math.sqrt(width)), flux, error, covariance };
}

function binned(rows: readonly Row[], bins: number): Row[] {
  const out: Row[] = [];
  for (let bin = 0; bin < bins; bin++) {
    const members = rows.filter((row) => Math.min(bins - 1, Math.floor(row.phase * bins)) === bin);
    if (members.length > 0) out.push(average(members, (bin + 0.5) / bins, 1 / bins));
  }
  return out;
}

/**
 * Puts native samples on one uniform velocity grid, by area. Bins are centred on whole multiples
 * of the step, so that one is centred on zero. With phase bins, exposures are averaged with one
 * weight each; a bin without exposures has no row.
 *
 * @param sampling Where the native samples are.
 * @param samples Normalised flux minus one and its error, on native pixels.
 * @param options Reach, step, phase bins.
 * @returns The grid.
 *
 * @example
 * ```ts
 * import { makeGrid } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const grid = makeGrid({
 *   count: 1,
 *   phase: Float64Array.of(0.25),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0.01),
 *   start: Uint32Array.of(0, 4),
 *   velocity_kms: Float64Array.of(-150, -50, 50, 150),
 *   pixel_kms: Float64Array.of(100, 100, 100, 100),
 *   profile_sigma_kms: Float64Array.of(80),
 * }, {
 *   flux: Float64Array.of(0, 1, 3, 0),
 *   error: Float64Array.of(1, 1, 1, 1),
 * }, { reach_kms: 100, step_kms: 100 });
 * assertEquals([grid.first_kms, grid.columns], [-100, 3]);
 * assertEquals(grid.flux, Float64Array.of(0.5, 2, 1.5));
 * ```
 */
export function makeGrid(
  sampling: Sampling,
  samples: { readonly flux: Float64Array; readonly error: Float64Array },
  options: GridOptions,
): TrailGrid {
  const { reach_kms, phase_bins = 0 } = options;
  const step_kms = options.step_kms ?? median(sampling.pixel_kms);
  const half = Math.max(1, Math.floor(reach_kms / step_kms + 1e-9));
  const columns = 2 * half + 1;
  const first_kms = -half * step_kms;
  const edges = Float64Array.from({ length: columns + 1 }, (_, j) => (j - half - 0.5) * step_kms);

  const single = Array.from({ length: sampling.count }, (_, i): Row => {
    const [from, to] = [sampling.start[i]!, sampling.start[i + 1]!];
    const bins = rebin({
      edges: pixelEdges(sampling.velocity_kms.subarray(from, to)),
      flux: samples.flux.subarray(from, to),
      error: samples.error.subarray(from, to),
    }, edges);
    const covariance = new Float64Array(columns);
    bins.covariance_next.forEach((c, j) => covariance[j] = Number.isFinite(c) ? c : 0);
    return {
      phase: sampling.phase[i]!,
      phase_width: sampling.phase_width[i]!,
      flux: bins.flux,
      error: bins.error.map((e) => Number.isFinite(e) ? e : Infinity),
      covariance,
    };
  });
  const rows = phase_bins > 0 ? binned(single, phase_bins) : single;
  const flat = (pick: (row: Row) => Float64Array) => {
    const out = new Float64Array(rows.length * columns);
    rows.forEach((row, r) => out.set(pick(row), r * columns));
    return out;
  };
  return {
    rows: rows.length,
    columns,
    first_kms,
    step_kms,
    phase: Float64Array.from(rows, (row) => row.phase),
    phase_width: Float64Array.from(rows, (row) => row.phase_width),
    flux: flat((row) => row.flux),
    error: flat((row) => row.error),
    covariance_next: flat((row) => row.covariance),
  };
}
