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

/** Nodes per σ of the sharpest profile, and circles that stand for a ring. */
const NODES_PER_SIGMA = 4, CIRCLES = 4;

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
  const { rings_kms, edges_kms, sigma_kms } = options;
  const bins = edges_kms.length - 1, rings = rings_kms.length - 1;
  const step = sigma_kms.reduce((a, b) => Math.min(a, b), Infinity) / NODES_PER_SIGMA;
  const nodes = Math.ceil(rings_kms[rings]! / step) + 1;
  const seen = blurredBins(options, { step, nodes });
  const kernels = new Float64Array(rings * bins);
  const flux = new Float64Array(nodes);
  for (let r = 0; r < rings; r++) {
    flux.fill(0);
    for (let c = 0; c < CIRCLES; c++) {
      const share = (c + 0.5) / CIRCLES;
      const radius = rings_kms[r]! + share * (rings_kms[r + 1]! - rings_kms[r]!);
      // Second differences of the density's second integral share it between nodes linearly.
      for (let k = 0; k < nodes; k++) {
        const v = k * step;
        const here = secondIntegral(v, radius), after = secondIntegral(v + step, radius);
        const bend = k === 0 ? after - here : after - 2 * here + secondIntegral(v - step, radius);
        flux[k] = flux[k]! + bend / (step * CIRCLES);
      }
    }
    for (let b = 0; b < bins; b++) {
      let sum = 0;
      for (let k = 0; k < nodes; k++) sum += seen[b * nodes + k]! * flux[k]!;
      kernels[r * bins + b] = sum;
    }
  }
  return kernels;
}

/** Second integral of the density of |v| = R |sin θ|, 2/(π √(R² − v²)). */
function secondIntegral(v: number, radius: number): number {
  return v >= radius
    ? v
    : 2 / Math.PI * (v * Math.asin(v / radius) + Math.sqrt(radius * radius - v * v));
}

/** Mean density in bin b of unit flux at node k of |v|, half of it at either sign; bins × nodes. */
function blurredBins(
  options: RingKernelOptions,
  { step, nodes }: { readonly step: number; readonly nodes: number },
): Float64Array {
  const { edges_kms, sigma_kms, weight } = options;
  const bins = edges_kms.length - 1;
  const out = new Float64Array(bins * nodes);
  for (let b = 0; b < bins; b++) {
    const low = edges_kms[b]!, high = edges_kms[b + 1]!;
    for (let k = 0; k < nodes; k++) {
      const v = k * step;
      const share = sigma_kms.reduce((sum, sigma, s) => {
        // Sharing between nodes widens by a sixth of a step squared.
        const width = Math.sqrt(2 * sigma * sigma - step * step / 3);
        const near = erf((high - v) / width) - erf((low - v) / width);
        const far = erf((high + v) / width) - erf((low + v) / width);
        return sum + weight[s]! * 0.25 * (near + far);
      }, 0);
      out[b * nodes + k] = share / (high - low);
    }
  }
  return out;
}
