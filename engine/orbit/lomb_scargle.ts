import { solveInPlace } from "./small_system.ts";
import { requireSeries, type TimeSeries } from "./time_series.ts";

/** A floating-mean Lomb–Scargle periodogram. */
export interface LombScargle {
  /** Frequencies, F values, per unit of time. */
  readonly frequency: Float64Array;
  /** 1 − χ²(f)/χ²₀, F values in [0, 1]. */
  readonly power: Float64Array;
  /** χ²₀ of the best constant. */
  readonly chi_square_constant: number;
}

/** The best sinusoid at one frequency. */
export interface SinusoidFit {
  /** χ² of the best constant less χ² of the best sinusoid, over the former. */
  readonly power: number;
  /** Constant, then cosine and sine coefficients of the first harmonic, and of the second, …. */
  readonly coefficients: Float64Array;
}

/**
 * Best sinusoid (with harmonics) plus constant at one frequency, by weighted least squares.
 *
 * @param series Measurements.
 * @param frequency Per unit of time, positive.
 * @param options Number of harmonics.
 * @returns Power and coefficients; power 0 where the sinusoid cannot be told from a constant.
 * @throws {InputError} When the series cannot be used.
 *
 * @example
 * ```ts
 * import { fitSinusoid } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const time = Float64Array.from({ length: 12 }, (_, k) => 0.37 * k);
 * const value = time.map((t) => 5 + 2 * Math.cos(2 * Math.PI * 0.7 * t));
 * const { power, coefficients } = fitSinusoid({ time, value, error: time.map(() => 1) }, 0.7);
 * assertAlmostEquals(power, 1, 1e-12);
 * assertAlmostEquals(coefficients[1]!, 2, 1e-10);
 * ```
 */
export function fitSinusoid(
  series: TimeSeries,
  frequency: number,
  options: {
    /** @default {1} */
    readonly harmonics?: number;
  } = {},
): SinusoidFit {
  const { harmonics = 1 } = options;
  requireSeries(series, "fit sinusoid");
  const { time, value, error } = series;
  const size = 2 * harmonics + 1;
  const { mean, chi_square, weight } = constantFit(series);
  const matrix = new Float64Array(size * size);
  const right = new Float64Array(size);
  const row = new Float64Array(size);
  for (let n = 0; n < time.length; n++) {
    row[0] = 1;
    for (let h = 1; h <= harmonics; h++) {
      const angle = 2 * Math.PI * h * frequency * time[n]!;
      row[2 * h - 1] = Math.cos(angle);
      row[2 * h] = Math.sin(angle);
    }
    const w = 1 / (error[n]! ** 2 * weight);
    for (let i = 0; i < size; i++) {
      right[i]! += w * row[i]! * (value[n]! - mean);
      for (let j = 0; j <= i; j++) matrix[i * size + j]! += w * row[i]! * row[j]!;
    }
  }
  const moments = right.slice();
  if (!solveInPlace(matrix, right, size)) {
    return { power: 0, coefficients: Float64Array.from({ length: size }, (_, i) => i ? 0 : mean) };
  }
  let gain = 0;
  for (let i = 0; i < size; i++) gain += right[i]! * moments[i]!;
  right[0]! += mean;
  return { power: gain * weight / chi_square, coefficients: right };
}

/** Best constant: weighted mean, its chi-square, sum of weights. */
function constantFit({ value, error }: TimeSeries) {
  let weight = 0, sum = 0;
  for (let n = 0; n < value.length; n++) {
    weight += 1 / error[n]! ** 2;
    sum += value[n]! / error[n]! ** 2;
  }
  const mean = sum / weight;
  let chi_square = 0;
  for (let n = 0; n < value.length; n++) chi_square += ((value[n]! - mean) / error[n]!) ** 2;
  return { mean, chi_square, weight };
}

/**
 * Lomb–Scargle periodogram with weights and a floating mean (Zechmeister & Kürster 2009, A&A 496,
 * 577), or with harmonics.
 *
 * @param series Measurements.
 * @param frequency Frequencies, per unit of time; a uniform grid is computed by recurrence.
 * @param options Number of harmonics.
 * @returns Power at each frequency.
 * @throws {InputError} When the series cannot be used.
 *
 * @example
 * ```ts
 * import { lombScargle } from "@millrace/millrace/orbit";
 * import { assert } from "@std/assert";
 *
 * const time = Float64Array.from({ length: 30 }, (_, k) => 0.37 * k + 0.05 * Math.sin(9 * k));
 * const value = time.map((t) => 5 + 2 * Math.cos(2 * Math.PI * 0.7 * t));
 * const frequency = Float64Array.of(0.5, 0.7, 0.9);
 * const { power } = lombScargle({ time, value, error: time.map(() => 1) }, frequency);
 * assert(power[1]! > 0.999 && power[0]! < 0.5 && power[2]! < 0.5);
 * ```
 */
export function lombScargle(
  series: TimeSeries,
  frequency: Float64Array,
  options: {
    /** @default {1} */
    readonly harmonics?: number;
  } = {},
): LombScargle {
  const { harmonics = 1 } = options;
  requireSeries(series, "compute periodogram");
  const { chi_square } = constantFit(series);
  const step = uniformStep(frequency);
  const power = harmonics === 1 && step !== null
    ? uniformPower(series, frequency, step)
    : frequency.map((f) => fitSinusoid(series, f, { harmonics }).power);
  return { frequency, power, chi_square_constant: chi_square };
}

/** Step of a uniform grid; null when it is not one, or too short to gain by it. */
function uniformStep(frequency: Float64Array): number | null {
  if (frequency.length < 16) return null;
  const last = frequency.length - 1;
  const step = (frequency[last]! - frequency[0]!) / last;
  const even = frequency.every((f, k) =>
    Math.abs(f - frequency[0]! - k * step) < 1e-9 * Math.abs(step) * last
  );
  return step > 0 && even ? step : null;
}

/** One harmonic on a uniform grid: cosines and sines turned from one frequency to the next. */
function uniformPower(series: TimeSeries, frequency: Float64Array, step: number): Float64Array {
  const { time, value, error } = series;
  const { mean, chi_square, weight } = constantFit(series);
  const count = time.length;
  const c = new Float64Array(count), s = new Float64Array(count);
  const turn_c = time.map((t) => Math.cos(2 * Math.PI * step * t));
  const turn_s = time.map((t) => Math.sin(2 * Math.PI * step * t));
  const w = error.map((e) => 1 / (e * e * weight));
  const wy = value.map((y, n) => w[n]! * (y - mean));
  const power = new Float64Array(frequency.length);
  for (let k = 0; k < frequency.length; k++) {
    // Rounding grows with every turn: start afresh now and then.
    if (k % 512 === 0) {
      for (let n = 0; n < count; n++) {
        const angle = 2 * Math.PI * frequency[k]! * time[n]!;
        c[n] = Math.cos(angle);
        s[n] = Math.sin(angle);
      }
    }
    let C = 0, S = 0, YC = 0, YS = 0, CC = 0, CS = 0;
    for (let n = 0; n < count; n++) {
      const cn = c[n]!, sn = s[n]!, wn = w[n]!;
      C += wn * cn;
      S += wn * sn;
      YC += wy[n]! * cn;
      YS += wy[n]! * sn;
      CC += wn * cn * cn;
      CS += wn * cn * sn;
      c[n] = cn * turn_c[n]! - sn * turn_s[n]!;
      s[n] = sn * turn_c[n]! + cn * turn_s[n]!;
    }
    const SS = 1 - CC - S * S;
    CC -= C * C;
    CS -= C * S;
    const determinant = CC * SS - CS * CS;
    power[k] = determinant > 1e-13
      ? (SS * YC * YC + CC * YS * YS - 2 * CS * YC * YS) / determinant * weight / chi_square
      : 0;
  }
  return power;
}
