import { median } from "../numerics/mod.ts";
import type { WeighingData } from "./weighing_data.ts";

/** Standard deviations from the neighbours at which noise alone is not believed: 1 in some 10⁷ samples. */
const FAR = 6;
/** Neighbours on each side that say where a sample should be. */
const NEIGHBOURS = 3;
/** Noise by which a neighbour may fall short of what the instrument's profile makes of it. */
const MARGIN = 3;

/**
 * Samples that stand alone: further from their neighbours than noise goes, and sharper than the
 * instrument's profile, so that no light of the star can have made them. Such are hits of cosmic rays
 * on the line's flanks, where a search before the fit must be careful.
 *
 * @param residual Whitened residuals of a fit, N values.
 * @param data The samples.
 * @returns Their indices, ascending.
 */
export function loneSamples(residual: Float64Array, data: WeighingData): readonly number[] {
  const { count, start, pixel_kms, profile_sigma_kms } = data.sampling;
  // Errors may be wrong by a factor.
  const noise = Math.max(1, 1.4826 * median(residual.map(Math.abs)));
  const found: number[] = [];
  for (let i = 0; i < count; i++) {
    const from = start[i]!, to = start[i + 1]!;
    for (let n = from; n < to; n++) {
      if (Math.abs(residual[n]!) < FAR * noise / 2) continue;
      const near: number[] = [];
      for (let m = Math.max(from, n - NEIGHBOURS); m < Math.min(to, n + NEIGHBOURS + 1); m++) {
        if (m !== n) near.push(residual[m]!);
      }
      const middle = median(near);
      const height = residual[n]! - middle;
      if (Math.abs(height) < FAR * noise) continue;
      // A peak between two pixels is the sharpest: its farther neighbour has this share of it.
      const width = profile_sigma_kms[i]! / pixel_kms[n]!;
      const share = Math.exp(-1 / width ** 2);
      const beside = [n - 1, n + 1].filter((m) => m >= from && m < to)
        .map((m) => residual[m]! * Math.sign(height));
      const peak = residual[n]! * Math.sign(height);
      const top = beside.every((other) => other <= peak);
      if (top && Math.min(...beside) < share * peak - MARGIN * noise) found.push(n);
    }
  }
  return found;
}

/**
 * The same data without some samples.
 *
 * @param data The samples; not changed.
 * @param without Indices, ascending.
 * @returns The others.
 */
export function withoutSamples(data: WeighingData, without: readonly number[]): WeighingData {
  const gone = new Set(without);
  const pick = (values: Float64Array) => values.filter((_, n) => !gone.has(n));
  const { sampling } = data;
  let left = 0;
  const start = Uint32Array.from(sampling.start, (from, i) => {
    for (let n = sampling.start[i - 1] ?? 0; n < from; n++) if (!gone.has(n)) left++;
    return left;
  });
  return {
    ...data,
    sampling: {
      ...sampling,
      start,
      velocity_kms: pick(sampling.velocity_kms),
      pixel_kms: pick(sampling.pixel_kms),
    },
    flux: pick(data.flux),
    error: pick(data.error),
  };
}
