import { erf } from "../numerics/mod.ts";

/** Options of {@linkcode ringKernels}. */
export interface RingKernelOptions {
  /** Inner and outer speeds of adjoining rings, km/s, L + 1 values. */
  readonly rings_kms: Float64Array;
  /** Edges of the bins in speed |v|, km/s, B + 1 values. */
  readonly edges_kms: Float64Array;
  /** Standard deviations of the instrumental profile that occur, km/s. */
  readonly sigma_kms: readonly number[];
  /** Weight of each; they add up to one. */
  readonly weight: readonly number[];
}

/** Cells per σ of the sharpest profile, and circles that stand for a ring. */
const CELLS_PER_SIGMA = 8, CIRCLES = 4;

/**
 * Profiles of rings about the origin of the map, seen from all sides: mean over each bin of speed |v|
 * of the density of v = R sin θ for uniform θ and R, blurred by the instrumental profile. A ring of
 * unit flux has unit area over both signs of v.
 *
 * @param options Rings, bins, profiles.
 * @returns L × B row-major, 1/(km/s).
 *
 * @example A wide ring is faint in the middle: 1/(πR)
 * ```ts
 * import { ringKernels } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const [middle = NaN] = ringKernels({
 *   rings_kms: Float64Array.of(999, 1001),
 *   edges_kms: Float64Array.of(0, 10),
 *   sigma_kms: [30],
 *   weight: [1],
 * });
 * assertAlmostEquals(middle * Math.PI * 1000, 1, 1e-3);
 * ```
 */
export function ringKernels(options: RingKernelOptions): Float64Array {
  const { rings_kms, edges_kms, sigma_kms, weight } = options;
  const bins = edges_kms.length - 1, rings = rings_kms.length - 1;
  const cell = sigma_kms.reduce((a, b) => Math.min(a, b), Infinity) / CELLS_PER_SIGMA;
  const seen = blurredBins(options, cell);
  const cells = seen.length / bins;
  const kernels = new Float64Array(rings * bins);
  const inside = new Float64Array(cells + 1);
  for (let r = 0; r < rings; r++) {
    inside.fill(0);
    for (let c = 0; c < CIRCLES; c++) {
      const share = (c + 0.5) / CIRCLES;
      const radius = rings_kms[r]! + share * (rings_kms[r + 1]! - rings_kms[r]!);
      for (let k = 0; k <= cells; k++) {
        inside[k] = inside[k]! + 2 / Math.PI * Math.asin(Math.min(1, k * cell / radius)) / CIRCLES;
      }
    }
    for (let b = 0; b < bins; b++) {
      let sum = 0;
      for (let k = 0; k < cells; k++) sum += seen[b * cells + k]! * (inside[k + 1]! - inside[k]!);
      kernels[r * bins + b] = sum;
    }
  }
  return kernels;
}

/** Mean density in bin b of flux that leaves cell k of |v|, half of it at either sign; bins × cells. */
function blurredBins(options: RingKernelOptions, cell: number): Float64Array {
  const { rings_kms, edges_kms, sigma_kms, weight } = options;
  const bins = edges_kms.length - 1;
  const cells = Math.ceil(rings_kms[rings_kms.length - 1]! / cell);
  const out = new Float64Array(bins * cells);
  for (let b = 0; b < bins; b++) {
    const low = edges_kms[b]!, high = edges_kms[b + 1]!;
    for (let k = 0; k < cells; k++) {
      const v = (k + 0.5) * cell;
      const share = sigma_kms.reduce((sum, sigma, s) => {
        // Flux is spread evenly within its cell: the cell's own variance adds.
        const width = Math.sqrt(2 * sigma * sigma + cell * cell / 6);
        const near = erf((high - v) / width) - erf((low - v) / width);
        const far = erf((high + v) / width) - erf((low + v) / width);
        return sum + weight[s]! * 0.25 * (near + far);
      }, 0);
      out[b * cells + k] = share / (high - low);
    }
  }
  return out;
}
