import { Matrix } from "ml-matrix";
import { median, nonNegativeLeastSquares } from "../numerics/mod.ts";
import { runningMedian } from "./running_median.ts";

/** Errors estimated from the scatter of spectra. */
export interface EstimatedErrors {
  /** One standard deviation, one array a spectrum; infinite where the flux is not finite. */
  readonly error: readonly Float64Array[];
  /** Variance that does not depend on the flux. */
  readonly floor: number;
  /** Growth of the variance with the flux: one over the gain, for photons. */
  readonly growth: number;
  /** Correlation of the noise at lags of one and two pixels. */
  readonly lag_correlation: readonly [number, number];
}

// Third differences at a stride: smooth profiles cancel. Those that touch a line are left out, since of
// a sharp line something always remains.
function differences(
  flux: Float64Array,
  stride: number,
  quiet: Uint8Array,
): { difference: number[]; level: number[] } {
  const difference: number[] = [];
  const level: number[] = [];
  for (let i = 0; i + 3 * stride < flux.length; i++) {
    const [j, k, l] = [i + stride, i + 2 * stride, i + 3 * stride];
    if (!(quiet[i]! & quiet[j]! & quiet[k]! & quiet[l]!)) continue;
    const value = flux[i]! - 3 * flux[j]! + 3 * flux[k]! - flux[l]!;
    if (!Number.isFinite(value)) continue;
    difference.push(value);
    level.push(0.5 * (flux[j]! + flux[k]!));
  }
  return { difference, level };
}

function runningMean(flux: Float64Array, half: number): Float64Array {
  return flux.map((_, i) => {
    let sum = 0, count = 0;
    for (let k = Math.max(0, i - half); k <= Math.min(flux.length - 1, i + half); k++) {
      if (!Number.isFinite(flux[k]!)) continue;
      sum += flux[k]!;
      count++;
    }
    return sum / count;
  });
}

// 1 where a spectrum shows no line: where the mean of seven pixels stays near the median of a hundred.
function quietPixels(flux: Float64Array): Uint8Array {
  const every = new Uint8Array(flux.length).fill(1);
  const noise = Math.sqrt(scatter(differences(flux, 1, every).difference) / SQUARES);
  if (!(noise > 0)) return every;
  const mean = runningMean(flux, 3);
  const level = runningMedian(mean, mean, { half: 50 });
  const quiet = new Uint8Array(flux.length).fill(1);
  for (let i = 0; i < flux.length; i++) {
    // Twice the noise of a mean of seven, for the correlation that resampling leaves, and twice again.
    if (Math.abs(mean[i]! - level[i]!) > 4 * noise / Math.sqrt(7)) {
      quiet.fill(0, Math.max(0, i - 6), i + 7);
    }
  }
  // A spectrum that is lines throughout has no quiet part: then all of it must do.
  return quiet.reduce((sum, q) => sum + q, 0) < 0.2 * flux.length ? every : quiet;
}

const NORMAL = 1.482602218505602;
// Sum of the squares of 1, −3, 3, −1.
const SQUARES = 20;

// Variance from the median deviation, lines and spikes beyond four deviations left out again and again:
// even a few of them in a hundred would raise the median.
function scatter(values: readonly number[]): number {
  let kept = values.map(Math.abs);
  for (let pass = 0; pass < 5 && kept.length > 0; pass++) {
    const limit = 4 * NORMAL * median(kept);
    const inside = kept.filter((value) => value <= limit);
    if (inside.length === kept.length) break;
    kept = inside;
  }
  return kept.length === 0 ? NaN : (NORMAL * median(kept)) ** 2;
}

// Variance against flux, in bins of flux so that lines, a small part of the pixels, count for little.
function photonGrowth(difference: readonly number[], level: readonly number[]) {
  const bins = 12;
  const order = Array.from(level.keys()).sort((a, b) => level[a]! - level[b]!);
  const rows: number[][] = [];
  const data: number[] = [];
  for (let b = 0; b < bins; b++) {
    const members = order.slice(b * order.length / bins, (b + 1) * order.length / bins);
    if (members.length < 20) continue;
    const variance = scatter(members.map((i) => difference[i]!)) / SQUARES;
    if (!(variance > 0)) continue;
    // A variance from n samples has a relative error that falls as √n.
    const weight = Math.sqrt(members.length) / variance;
    const flux = Math.max(0, median(members.map((i) => level[i]!)));
    rows.push([weight, weight * flux]);
    data.push(weight * variance);
  }
  if (rows.length === 0) return { floor: scatter(difference) / SQUARES, growth: 0 };
  const [floor, growth] = nonNegativeLeastSquares(new Matrix(rows), Float64Array.from(data));
  return { floor: floor!, growth: growth! };
}

/**
 * Estimates the errors of spectra that came without: variance = floor + growth × flux, from third
 * differences of pixels three apart, which the correlation left by resampling does not reach; and
 * that correlation, from differences of pixels one and two apart. The spectra share floor and
 * growth but for a factor each.
 *
 * @param fluxes Fluxes of exposures of one set-up; NaN where not recorded.
 * @returns Errors and what they were made of; null when there are fewer than 50 pixels, or no scatter.
 *
 * @example
 * ```ts
 * import { estimateErrors } from "@millrace/millrace/spectra";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const random = randomStream(1);
 * const flux = Float64Array.from({ length: 4000 }, () => random.poisson(400));
 * assertAlmostEquals(estimateErrors([flux])!.error[0]![100]!, 20, 1);
 * ```
 */
export function estimateErrors(fluxes: readonly Float64Array[]): EstimatedErrors | null {
  const quiet = fluxes.map(quietPixels);
  const apart = [1, 2, 3].map((stride) =>
    fluxes.map((flux, k) => differences(flux, stride, quiet[k]!))
  );
  const wide = apart[2]!;
  const difference = wide.flatMap((d) => d.difference);
  const level = wide.flatMap((d) => d.level);
  if (difference.length < 50 || !(scatter(difference) > 0)) return null;
  const { floor, growth } = photonGrowth(difference, level);

  const smallest = 0.01 * scatter(difference) / SQUARES;
  const variance = (flux: number) => Math.max(smallest, floor + growth * Math.max(0, flux));
  const relative = (d: ReturnType<typeof differences>) =>
    d.difference.map((value, i) => value / Math.sqrt(variance(d.level[i]!)));
  const factor = wide.map((own) =>
    own.difference.length < 50 ? 1 : scatter(relative(own)) / SQUARES
  );
  const error = fluxes.map((flux, k) => {
    // A local level: the variance must not follow each pixel's own noise.
    const near = runningMedian(flux, flux, { half: 3 });
    return flux.map((f, i) =>
      Number.isFinite(f)
        ? Math.sqrt(variance(Number.isNaN(near[i]!) ? f : near[i]!) * factor[k]!)
        : Infinity
    );
  });

  // With correlations r1, r2 and none beyond: variances of the differences over 20, at strides 1 to 3.
  const [one, two, three] = apart.map((set) =>
    scatter(set.flatMap((d, k) => relative(d).map((value) => value / Math.sqrt(factor[k]!))))
  );
  const r2 = (three! - two!) / (1.5 * three!);
  const r1 = (three! - one! + 0.6 * r2 * three!) / (1.5 * three!);
  return { error, floor, growth, lag_correlation: [r1, r2] };
}
