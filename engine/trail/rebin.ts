/** A run of pixels that touch: N + 1 edges, N mean flux densities and their errors. */
export interface PixelRun {
  /** Edges, N + 1 values, strictly increasing, in the unit of the output edges. */
  readonly edges: Float64Array;
  /** Mean flux density of each pixel, N values. NaN counts as masked. */
  readonly flux: Float64Array;
  /** One standard deviation, N values, independent from pixel to pixel; not finite where masked. */
  readonly error: Float64Array;
}

/** The result of {@linkcode rebin}: M bins. */
export interface Rebinned {
  /** Mean flux density of the covered part of each bin, M values; NaN where nothing covers it. */
  readonly flux: Float64Array;
  /** One standard deviation, M values; NaN where not covered. */
  readonly error: Float64Array;
  /** Flux density times covered length, M values: its sum over bins is conserved. */
  readonly integral: Float64Array;
  /** Covered fraction of each bin, M values in [0, 1]. */
  readonly coverage: Float64Array;
  /** Covariance of each bin with the next one, M − 1 values: they share pixels. NaN if either is not covered. */
  readonly covariance_next: Float64Array;
}

/**
 * Averages a flux density by area onto other bins. It averages and does not sum: data divided by the
 * continuum are a density. Masked pixels add neither flux nor length.
 *
 * With w the overlap of pixel i and bin j and W the sum of w over pixels, the mean is Σ w f / W, its
 * error √Σ (w σ)² / W and the covariance of neighbours Σ w w' σ² / (W W'); see Carnall 2017,
 * arXiv:1705.05165, section 2.
 *
 * @param pixels The pixels to be averaged.
 * @param edges Edges of the output bins, M + 1 values, strictly increasing, in the same unit.
 * @returns Means, errors, integrals, coverage and the covariance of neighbours.
 *
 * @example Two pixels into one bin
 * ```ts
 * import { rebin } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const pixels = {
 *   edges: Float64Array.of(0, 1, 2),
 *   flux: Float64Array.of(1, 3),
 *   error: Float64Array.of(0.3, 0.4),
 * };
 * const bin = rebin(pixels, Float64Array.of(0, 2));
 * assertAlmostEquals(bin.flux[0]!, 2);
 * assertAlmostEquals(bin.error[0]!, 0.25);
 * ```
 */
export function rebin(pixels: PixelRun, edges: Float64Array): Rebinned {
  const { edges: from, flux, error } = pixels;
  const count = Math.max(edges.length - 1, 0);
  const length = new Float64Array(count);
  const integral = new Float64Array(count);
  const variance = new Float64Array(count);
  const shared = new Float64Array(Math.max(count - 1, 0));
  let first = 0;
  for (let i = 0; i < flux.length; i++) {
    const f = flux[i]!;
    const s = error[i]!;
    if (!Number.isFinite(f) || !Number.isFinite(s)) continue;
    const low = from[i]!;
    const high = from[i + 1]!;
    while (first < count && edges[first + 1]! <= low) first++;
    let before = 0;
    for (let j = first; j < count && edges[j]! < high; j++) {
      const w = Math.min(high, edges[j + 1]!) - Math.max(low, edges[j]!);
      if (!(w > 0)) continue;
      length[j]! += w;
      integral[j]! += w * f;
      variance[j]! += w * w * s * s;
      if (j > first && before > 0) shared[j - 1]! += before * w * s * s;
      before = w;
    }
  }
  const mean = new Float64Array(count).fill(NaN);
  const sigma = new Float64Array(count).fill(NaN);
  const coverage = new Float64Array(count);
  const covariance_next = new Float64Array(shared.length).fill(NaN);
  for (let j = 0; j < count; j++) {
    const W = length[j]!;
    coverage[j] = W / (edges[j + 1]! - edges[j]!);
    if (W === 0) continue;
    mean[j] = integral[j]! / W;
    sigma[j] = Math.sqrt(variance[j]!) / W;
    if (j > 0 && length[j - 1]! > 0) covariance_next[j - 1] = shared[j - 1]! / (W * length[j - 1]!);
  }
  return { flux: mean, error: sigma, integral, coverage, covariance_next };
}
