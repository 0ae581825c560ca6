/**
 * Spectral window of a set of instants, |Σ w exp 2πift|² / (Σ w)²: the shape that a single
 * frequency takes in the periodogram, so its peaks away from 0 are the spacings of aliases.
 *
 * @param time N instants.
 * @param frequency F frequencies, per unit of time.
 * @param options Weights.
 * @returns F values in [0, 1]; 1 at frequency 0.
 *
 * @example Nightly observations repeat at one cycle a day
 * ```ts
 * import { spectralWindow } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const time = Float64Array.of(0, 1, 2, 3);
 * assertAlmostEquals(spectralWindow(time, Float64Array.of(1))[0]!, 1, 1e-12);
 * ```
 */
export function spectralWindow(time: Float64Array, frequency: Float64Array, options: {
  /** N weights. @default {1 each} */
  readonly weight?: Float64Array;
} = {}): Float64Array {
  const weight = options.weight ?? new Float64Array(time.length).fill(1);
  const total = weight.reduce((sum, w) => sum + w, 0);
  return frequency.map((f) => {
    let c = 0, s = 0;
    for (let n = 0; n < time.length; n++) {
      const angle = 2 * Math.PI * f * time[n]!;
      c += weight[n]! * Math.cos(angle);
      s += weight[n]! * Math.sin(angle);
    }
    return (c * c + s * s) / (total * total);
  });
}
