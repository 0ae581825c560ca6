import { InputError } from "../errors.ts";
import { requireSeries, type TimeSeries } from "./time_series.ts";

/**
 * Phase dispersion minimisation (Stellingwerf 1978, ApJ 224, 953): scatter within phase bins over
 * scatter of all, unweighted. It assumes no shape; a true period gives a low θ.
 *
 * Bins have width 1/`bins`; each of `covers` sets of them is displaced by 1/(bins·covers). Empty
 * bins are left out; a bin of one counts as a bin and adds no scatter.
 *
 * @param series Measurements; errors are not used.
 * @param frequency Frequencies, per unit of time.
 * @param options Bins and covers.
 * @returns θ at each frequency.
 * @throws {InputError} When the series cannot be used, bins or covers are not whole and positive, or
 * the values are all the same.
 *
 * @example
 * ```ts
 * import { phaseDispersion } from "@millrace/millrace/orbit";
 * import { assert } from "@std/assert";
 *
 * const time = Float64Array.from({ length: 60 }, (_, k) => 0.37 * k);
 * const value = time.map((t) => Math.cos(2 * Math.PI * 0.71 * t));
 * const series = { time, value, error: time.map(() => 1) };
 * const theta = phaseDispersion(series, Float64Array.of(0.71, 0.8));
 * assert(theta[0]! < 0.2 && theta[1]! > 0.7);
 * ```
 */
export function phaseDispersion(
  series: TimeSeries,
  frequency: Float64Array,
  options: {
    /** @default {5} */
    readonly bins?: number;
    /** @default {2} */
    readonly covers?: number;
  } = {},
): Float64Array {
  const { bins = 5, covers = 2 } = options;
  const action = "compute phase dispersion";
  requireSeries(series, action);
  if (!Number.isInteger(bins) || bins < 2 || !Number.isInteger(covers) || covers < 1) {
    throw new InputError({
      action,
      rule: "bins must be a whole number of at least 2, and covers of at least 1",
      value: [bins, covers],
    });
  }
  const { time, value } = series;
  const count = time.length;
  const mean = value.reduce((sum, x) => sum + x, 0) / count;
  const variance = value.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (count - 1);
  if (!(variance > 0)) {
    throw new InputError({ action, rule: "the values must differ", value: mean });
  }
  const phase = new Float64Array(count);
  const number = new Float64Array(bins),
    sums = new Float64Array(bins),
    squares = new Float64Array(bins);
  return frequency.map((f) => {
    for (let n = 0; n < count; n++) phase[n] = time[n]! * f - Math.floor(time[n]! * f);
    let scatter = 0, members = 0, filled = 0;
    for (let cover = 0; cover < covers; cover++) {
      number.fill(0);
      sums.fill(0);
      squares.fill(0);
      const shift = cover / (bins * covers);
      for (let n = 0; n < count; n++) {
        const moved = phase[n]! - shift;
        const bin = Math.min(bins - 1, Math.floor((moved < 0 ? moved + 1 : moved) * bins));
        const off = value[n]! - mean;
        number[bin]!++;
        sums[bin]! += off;
        squares[bin]! += off * off;
      }
      for (let bin = 0; bin < bins; bin++) {
        if (number[bin] === 0) continue;
        scatter += Math.max(0, squares[bin]! - sums[bin]! ** 2 / number[bin]!);
        members += number[bin]!;
        filled++;
      }
    }
    return scatter / (members - filled) / variance;
  });
}
