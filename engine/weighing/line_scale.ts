import { minimiseScalar } from "../numerics/mod.ts";
import type { WeighingData } from "./weighing_data.ts";
import type { Whitening } from "./whitening.ts";

/** How much the line's brightness, relative to the model, varies from exposure to exposure. */
export interface LineScale {
  /** Relative root-mean-square variation beyond noise. */
  readonly rms: number;
  /** Its standard deviation, from the number of exposures. */
  readonly rms_error: number;
  /** Relative excess of each exposure's line, P values. */
  readonly excess: Float64Array;
  /** Its standard deviation, P values. */
  readonly excess_error: Float64Array;
}

/**
 * Measures flickering of the line, or of its grey scale where the data were not divided by the
 * continuum: each exposure's line is compared with the model, and the variance beyond the noise is
 * the one of greatest likelihood when excesses are normal.
 *
 * @param line The model's line, N samples.
 * @param options Data, and a whitening of baselines alone.
 * @returns The variation.
 */
export function measureLineScale(
  line: Float64Array,
  { data, whitening }: { readonly data: WeighingData; readonly whitening: Whitening },
): LineScale {
  const { count, start } = data.sampling;
  const pattern = whitening.apply(line);
  const residual = whitening.apply(data.flux.map((value, n) => value - line[n]!));
  const excess = new Float64Array(count);
  const excess_error = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    let length = 0, along = 0;
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      length += pattern[n]! * pattern[n]!;
      along += pattern[n]! * residual[n]!;
    }
    excess[i] = length > 0 ? along / length : 0;
    excess_error[i] = length > 0 ? 1 / Math.sqrt(length) : Infinity;
  }
  const used = [...excess.keys()].filter((i) => excess_error[i]! < Infinity);
  const largest = used.reduce((most, i) => Math.max(most, Math.abs(excess[i]!)), 0);
  const unlikelihood = (rms: number) =>
    used.reduce((sum, i) => {
      const variance = rms * rms + excess_error[i]! ** 2;
      return sum + Math.log(variance) + excess[i]! ** 2 / variance;
    }, 0);
  const found = largest === 0 ? 0 : minimiseScalar(unlikelihood, [0, largest]).x;
  const rms = unlikelihood(found) < unlikelihood(0) ? found : 0;
  const noise = used.reduce((sum, i) => sum + excess_error[i]! ** 2, 0) / Math.max(1, used.length);
  return {
    rms,
    rms_error: Math.sqrt((rms * rms + noise) / (2 * Math.max(1, used.length))),
    excess,
    excess_error,
  };
}
