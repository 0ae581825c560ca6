import { InputError } from "../errors.ts";
import { minimiseScalar, type RandomStream } from "../numerics/mod.ts";
import { type FalseAlarm, falseAlarm, falseAlarmByResampling } from "./false_alarm.ts";
import { fitSinusoid, lombScargle } from "./lomb_scargle.ts";
import { phaseDispersion } from "./phase_dispersion.ts";
import { spectralWindow } from "./spectral_window.ts";
import { requireSeries, type TimeSeries } from "./time_series.ts";

/** A period that the data allow, or nearly. */
export interface PeriodCandidate {
  /** Period, d. */
  readonly period_d: number;
  /** Frequency, cycles per day. */
  readonly frequency_per_d: number;
  /** 1 − χ²/χ²₀. */
  readonly power: number;
  /**
   * Chi-square above that of the best period, errors scaled so that the best period fits: 9 is what
   * separates two periods at three standard deviations.
   */
  readonly delta_chi_square: number;
  /** Cycles per day by which the frequency differs from the best one. */
  readonly beat_per_d: number;
  /** Difference in the number of orbits counted from first to last velocity. */
  readonly cycles_over_span: number;
}

/** Result of {@linkcode searchPeriod}. */
export interface PeriodSearch {
  /** Frequencies searched, cycles per day, uniform. */
  readonly frequency_per_d: Float64Array;
  /** Floating-mean Lomb–Scargle power. */
  readonly power: Float64Array;
  /** Phase dispersion θ (5 bins, 2 covers). */
  readonly dispersion: Float64Array;
  /** Offsets of frequency, cycles per day, of the spectral window. */
  readonly window_frequency_per_d: Float64Array;
  /** Spectral window of the times. */
  readonly window: Float64Array;
  /** Candidates, best first; the first is the period found. */
  readonly candidates: readonly PeriodCandidate[];
  /** Whether another candidate lies within 9 of the best in chi-square: the cycle count is open. */
  readonly ambiguous: boolean;
  /** Frequency at which the phase dispersion is least, cycles per day. */
  readonly dispersion_best_per_d: number;
  /** False-alarm probability by formula. */
  readonly false_alarm: FalseAlarm;
  /** False-alarm probability by resampling; null when no source of chance was given. */
  readonly false_alarm_resampled: number | null;
}

/** Options of {@linkcode searchPeriod}. */
export interface PeriodSearchOptions {
  /** Shortest and longest period, d. */
  readonly period_range_d: readonly [shortest: number, longest: number];
  /** Grid points per width of a peak (1/span). @default {10} */
  readonly oversampling?: number;
  /** Most candidates listed. @default {10} */
  readonly candidates?: number;
  /** Source of chance for the resampled false alarm. @default {undefined} */
  readonly random?: RandomStream;
  /** Trials of the resampled false alarm. @default {200} */
  readonly trials?: number;
}

const MOST_FREQUENCIES = 2_000_000;

/**
 * Throws unless a range of periods can be searched.
 *
 * @param range Shortest and longest period, d.
 * @throws {InputError} When it is empty, not positive or not finite.
 *
 * @example
 * ```ts
 * import { requirePeriodRange } from "@millrace/millrace/orbit";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(() => requirePeriodRange([0.3, 0.05]), Error, "key period_range_d");
 * ```
 */
export function requirePeriodRange(range: readonly [shortest: number, longest: number]): void {
  const [shortest, longest] = range;
  if (shortest > 0 && longest > shortest && Number.isFinite(longest)) return;
  throw new InputError({
    action: "search period",
    rule: "the period range must run from a positive shortest to a longer longest period",
    value: [shortest, longest],
    unit: "d",
    key: "period_range_d",
  });
}

/** Indices of local maxima, highest first. */
function peaks(power: Float64Array): number[] {
  const found: number[] = [];
  for (let k = 0; k < power.length; k++) {
    const left = power[k - 1] ?? -1, right = power[k + 1] ?? -1;
    if (power[k]! >= left && power[k]! > right) found.push(k);
  }
  return found.sort((a, b) => power[b]! - power[a]!);
}

/**
 * Searches velocities for a period: floating-mean Lomb–Scargle for the sinusoid of a circular orbit,
 * refined off the grid, with phase dispersion as a witness that assumes no shape, the spectral
 * window that explains the aliases, and their Δχ².
 *
 * @param series Velocities at times in days.
 * @param options Range, sampling, chance.
 * @returns Periodogram and candidates.
 * @throws {InputError} When the range is empty, the series cannot be used, or range times span need
 * more than two million frequencies.
 *
 * @example
 * ```ts
 * import { searchPeriod } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const time = Float64Array.from({ length: 40 }, (_, k) => 0.011 * k + Math.floor(k / 20));
 * const value = time.map((t) => 300 * Math.sin(2 * Math.PI * t / 0.083));
 * const { candidates } = searchPeriod(
 *   { time, value, error: time.map(() => 10) },
 *   { period_range_d: [0.05, 0.2] },
 * );
 * assertAlmostEquals(candidates[0]!.period_d, 0.083, 1e-6);
 * ```
 */
export function searchPeriod(series: TimeSeries, options: PeriodSearchOptions): PeriodSearch {
  const { period_range_d, oversampling = 10, candidates: most = 10, random, trials } = options;
  requirePeriodRange(period_range_d);
  requireSeries(series, "search period");
  const first = series.time.reduce((a, b) => Math.min(a, b));
  const last = series.time.reduce((a, b) => Math.max(a, b));
  const span = last - first;
  const [low, high] = [1 / period_range_d[1], 1 / period_range_d[0]];
  const count = Math.max(16, Math.ceil((high - low) * span * oversampling) + 1);
  if (count > MOST_FREQUENCIES) {
    throw new InputError({
      action: "search period",
      rule: `range and time span (${
        span.toFixed(1)
      } d) must need at most ${MOST_FREQUENCIES} frequencies`,
      value: count,
      key: "period_range_d",
      remedy: "narrow the range, or search one season first",
    });
  }
  // Times from the middle keep the phases small.
  const centred: TimeSeries = { ...series, time: series.time.map((t) => t - (first + last) / 2) };
  const frequency = Float64Array.from(
    { length: count },
    (_, k) => low + (high - low) * k / (count - 1),
  );
  const { power, chi_square_constant } = lombScargle(centred, frequency);
  const dispersion = phaseDispersion(centred, frequency);
  const step = (high - low) / (count - 1);
  const refined = peaks(power).slice(0, 3 * most).map((k) => {
    const around = [
      Math.max(low, frequency[k]! - step),
      Math.min(high, frequency[k]! + step),
    ] as const;
    const { x, value } = minimiseScalar((f) => -fitSinusoid(centred, f).power, around, {
      tolerance: 1e-9,
    });
    return -value >= power[k]! ? { f: x, power: -value } : { f: frequency[k]!, power: power[k]! };
  }).sort((a, b) => b.power - a.power);
  const best = refined[0]!;
  const left = Math.max(0, 1 - best.power) * chi_square_constant;
  const scale = Math.max(1, left / Math.max(1, series.time.length - 4));
  const candidates = refined.slice(0, most).map(({ f, power }): PeriodCandidate => ({
    period_d: 1 / f,
    frequency_per_d: f,
    power,
    delta_chi_square: (best.power - power) * chi_square_constant / scale,
    beat_per_d: f - best.f,
    cycles_over_span: (f - best.f) * span,
  }));
  const window_frequency_per_d = Float64Array.from(
    { length: Math.min(4000, Math.ceil(3.2 * span * oversampling) + 1) },
    (_, k) => k / (span * oversampling),
  );
  const bottom = dispersion.reduce((at, theta, k) => theta < dispersion[at]! ? k : at, 0);
  return {
    frequency_per_d: frequency,
    power,
    dispersion,
    window_frequency_per_d,
    window: spectralWindow(centred.time, window_frequency_per_d, {
      weight: series.error.map((e) => 1 / (e * e)),
    }),
    candidates,
    ambiguous: candidates.slice(1).some((one) => one.delta_chi_square < 9),
    dispersion_best_per_d: frequency[bottom]!,
    false_alarm: falseAlarm(best.power, centred, { maximum_frequency: high }),
    false_alarm_resampled: random
      ? falseAlarmByResampling(best.power, centred, { frequency, random, trials: trials ?? 200 })
      : null,
  };
}
