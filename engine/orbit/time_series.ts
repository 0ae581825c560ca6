import { InputError } from "../errors.ts";

/** Measurements at instants, with errors. */
export interface TimeSeries {
  /** N instants, any unit, any order. */
  readonly time: Float64Array;
  /** N values. */
  readonly value: Float64Array;
  /** N standard deviations, positive and finite. */
  readonly error: Float64Array;
}

/**
 * Throws unless a series can be searched for a period.
 *
 * @param series The series.
 * @param action What was being done, for the message.
 * @throws {InputError} When it has fewer than 5 points, columns of different length, a value that
 * is not finite or an error that is not positive.
 *
 * @example
 * ```ts
 * import { requireSeries } from "@millrace/millrace/orbit";
 * import { assertThrows } from "@std/assert";
 *
 * const empty = new Float64Array(0);
 * assertThrows(
 *   () => requireSeries({ time: empty, value: empty, error: empty }, "search period"),
 *   Error,
 *   "at least 5",
 * );
 * ```
 */
export function requireSeries(series: TimeSeries, action: string): void {
  const { time, value, error } = series;
  if (time.length < 5) {
    throw new InputError({ action, rule: "it takes at least 5 measurements", value: time.length });
  }
  if (value.length !== time.length || error.length !== time.length) {
    throw new InputError({
      action,
      rule: "times, values and errors must be equally many",
      value: [time.length, value.length, error.length],
    });
  }
  const bad = time.findIndex((t, k) =>
    !Number.isFinite(t) || !Number.isFinite(value[k]!) || !(error[k]! > 0 && error[k]! < Infinity)
  );
  if (bad < 0) return;
  throw new InputError({
    action,
    rule: "times and values must be finite, and errors positive and finite",
    value: [time[bad], value[bad], error[bad]],
    key: `measurement ${bad + 1}`,
  });
}
