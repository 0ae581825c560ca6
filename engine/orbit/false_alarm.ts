import { gammaLn, type RandomStream } from "../numerics/mod.ts";
import { lombScargle } from "./lomb_scargle.ts";
import { requireSeries, type TimeSeries } from "./time_series.ts";

/** Chance that noise alone gives a peak as high. */
export interface FalseAlarm {
  /** At one frequency fixed beforehand: (1 − P)^((N−3)/2). */
  readonly single: number;
  /** Anywhere up to a highest frequency (Baluev 2008, MNRAS 385, 1279). */
  readonly searched: number;
}

/**
 * False-alarm probability of a peak of a floating-mean Lomb–Scargle periodogram by formula. It
 * holds for independent normal errors of known relative size.
 *
 * @param power Height of the peak, 1 − χ²/χ²₀.
 * @param series The series that gave it.
 * @param options Highest frequency searched.
 * @returns Both probabilities.
 * @throws {InputError} When the series cannot be used.
 *
 * @example
 * ```ts
 * import { falseAlarm } from "@millrace/millrace/orbit";
 * import { assert } from "@std/assert";
 *
 * const time = Float64Array.from({ length: 30 }, (_, k) => 0.37 * k);
 * const series = { time, value: time.map(Math.sin), error: time.map(() => 1) };
 * const { single, searched } = falseAlarm(0.5, series, { maximum_frequency: 10 });
 * assert(single < searched && searched < 1);
 * ```
 */
export function falseAlarm(power: number, series: TimeSeries, options: {
  /** Per unit of time. */
  readonly maximum_frequency: number;
}): FalseAlarm {
  requireSeries(series, "compute false-alarm probability");
  const { time, error } = series;
  const count = time.length;
  const left = Math.max(0, 1 - power);
  const single = left ** ((count - 3) / 2);
  let weight = 0, mean = 0, square = 0;
  for (let n = 0; n < count; n++) {
    const w = 1 / error[n]! ** 2;
    weight += w;
    mean += w * time[n]!;
  }
  mean /= weight;
  for (let n = 0; n < count; n++) square += (time[n]! - mean) ** 2 / error[n]! ** 2;
  const span = Math.sqrt(4 * Math.PI * square / weight);
  const g = Math.sqrt(2 / (count - 1)) *
    Math.exp(gammaLn((count - 1) / 2) - gammaLn((count - 2) / 2));
  const tau = g * options.maximum_frequency * span * left ** ((count - 4) / 2) *
    Math.sqrt((count - 1) * power / 2);
  // 1 − (1 − s) e^−τ without cancellation.
  return { single, searched: -Math.expm1(-tau) * (1 - single) + single };
}

/**
 * False-alarm probability by resampling: values and their errors are dealt out afresh over the
 * times, which destroys any period and keeps the distribution of values and of times. It needs no
 * normal errors.
 *
 * @param power Height of the peak that was found.
 * @param series The series that gave it.
 * @param options Frequencies searched, chance, trials.
 * @returns Share of trials with a higher peak, (k + 1)/(n + 1).
 * @throws {InputError} When the series cannot be used.
 *
 * @example
 * ```ts
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { falseAlarmByResampling } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const time = Float64Array.from({ length: 30 }, (_, k) => 0.37 * k);
 * const series = { time, value: time.map((t) => Math.sin(t)), error: time.map(() => 1) };
 * const frequency = Float64Array.from({ length: 50 }, (_, k) => 0.01 * (k + 1));
 * const chance = falseAlarmByResampling(0.99, series, {
 *   frequency, random: randomStream(1), trials: 99,
 * });
 * assertAlmostEquals(chance, 0.01, 1e-12);
 * ```
 */
export function falseAlarmByResampling(power: number, series: TimeSeries, options: {
  /** Frequencies searched, per unit of time. */
  readonly frequency: Float64Array;
  /** Source of chance. */
  readonly random: RandomStream;
  /** @default {200} */
  readonly trials?: number;
}): number {
  const { frequency, random, trials = 200 } = options;
  requireSeries(series, "compute false-alarm probability");
  const { time, value, error } = series;
  let higher = 0;
  for (let trial = 0; trial < trials; trial++) {
    const order = random.shuffle(Array.from(time, (_, n) => n));
    const dealt: TimeSeries = {
      time,
      value: Float64Array.from(order, (n) => value[n]!),
      error: Float64Array.from(order, (n) => error[n]!),
    };
    if (lombScargle(dealt, frequency).power.some((p) => p >= power)) higher++;
  }
  return (higher + 1) / (trials + 1);
}
