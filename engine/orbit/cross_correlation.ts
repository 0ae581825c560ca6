import { InputError } from "../errors.ts";

/** A cross-correlation function and its peak. */
export interface CrossCorrelation {
  /** Lags, in samples, 2N − 1 values from −(N − 1). */
  readonly lag: Int32Array;
  /** Normalised correlation, in [−1, 1]. */
  readonly correlation: Float64Array;
  /** Lag of the peak, in samples, by the parabola through its three highest points. */
  readonly peak_lag: number;
  /** Highest sampled correlation. */
  readonly peak: number;
}

/**
 * Cross-correlation of a spectrum with a template on the same uniform grid of log wavelength (of
 * velocity, for a short range), means taken out (Tonry & Davis 1979, AJ 84, 1511). A positive lag is
 * a spectrum to the red of the template.
 *
 * It has no errors and no masks: {@linkcode matchExposures} is what measures; this is for looking
 * at, and for templates on their own.
 *
 * @param template N samples.
 * @param spectrum N samples.
 * @returns The function and its peak.
 * @throws {InputError} When lengths differ, there are fewer than 3 samples, or one is constant.
 *
 * @example
 * ```ts
 * import { crossCorrelate } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const line = (at: number) => Float64Array.from({ length: 60 }, (_, k) => 1 - 0.5 * Math.exp(-(((k - at) / 4) ** 2)));
 * assertAlmostEquals(crossCorrelate(line(28), line(31.5)).peak_lag, 3.5, 0.05);
 * ```
 */
export function crossCorrelate(template: Float64Array, spectrum: Float64Array): CrossCorrelation {
  const count = template.length;
  const action = "cross-correlate";
  if (count < 3 || spectrum.length !== count) {
    throw new InputError({
      action,
      rule: "template and spectrum must have the same number of samples, at least 3",
      value: [count, spectrum.length],
    });
  }
  const centred = (values: Float64Array) => {
    const mean = values.reduce((sum, v) => sum + v, 0) / count;
    return values.map((v) => v - mean);
  };
  const t = centred(template), o = centred(spectrum);
  const square = (values: Float64Array) => values.reduce((sum, v) => sum + v * v, 0);
  const norm = Math.sqrt(square(t) * square(o));
  if (!(norm > 0)) {
    throw new InputError({ action, rule: "neither may be constant or hold NaN", value: norm });
  }
  const lag = Int32Array.from({ length: 2 * count - 1 }, (_, k) => k - count + 1);
  const correlation = new Float64Array(lag.length);
  lag.forEach((k, at) => {
    let sum = 0;
    for (let n = Math.max(0, -k); n < Math.min(count, count - k); n++) sum += t[n]! * o[n + k]!;
    correlation[at] = sum / norm;
  });
  const top = correlation.reduce((best, c, k) => c > correlation[best]! ? k : best, 0);
  const inner = Math.min(Math.max(top, 1), lag.length - 2);
  const [left, middle, right] = correlation.slice(inner - 1, inner + 2) as unknown as [
    number,
    number,
    number,
  ];
  return {
    lag,
    correlation,
    peak_lag: lag[inner]! + (left - right) / (2 * (left - 2 * middle + right)),
    peak: correlation[top]!,
  };
}
