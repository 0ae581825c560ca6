import FFT from "fft.js";
import { requireCount } from "./require.ts";

/**
 * Smallest power of two that is not below a number.
 *
 * @param n Number, 1 or more.
 * @returns 1, 2, 4, 8, …
 *
 * @example
 * ```ts
 * import { nextPowerOfTwo } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals([1, 2, 3, 1000].map(nextPowerOfTwo), [1, 2, 4, 1024]);
 * ```
 */
export function nextPowerOfTwo(n: number): number {
  let power = 1;
  while (power < n) power *= 2;
  return power;
}

/** Discrete Fourier transform of real values. */
export interface RealSpectrum {
  /** Length N of the transform: the padded length of the input. */
  readonly size: number;
  /** Real parts, N/2 + 1 values, of Σ x[n] exp(−2πi kn/N) for k = 0 … N/2. */
  readonly real: Float64Array;
  /** Imaginary parts, N/2 + 1 values. */
  readonly imaginary: Float64Array;
}

/**
 * Fourier transform of real values, padded with zeros to a power of two.
 *
 * @param values The values; not changed.
 * @param options Options.
 * @param options.size Length to pad to at least.
 * @default size The number of values
 * @returns The half of the spectrum that a real input needs.
 * @throws {InputError} When there are no values.
 *
 * @example
 * ```ts
 * import { realFourier } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { real } = realFourier([1, 0, -1, 0]);
 * assertAlmostEquals(real[1]!, 2, 1e-15);
 * ```
 */
export function realFourier(
  values: ArrayLike<number>,
  { size = values.length }: { size?: number } = {},
): RealSpectrum {
  requireCount("transform", values, 1);
  const n = Math.max(2, nextPowerOfTwo(Math.max(size, values.length)));
  const fft = new FFT(n);
  const out: number[] = fft.createComplexArray();
  const padded = new Float64Array(n);
  padded.set(values);
  fft.realTransform(out, padded);
  const real = new Float64Array(n / 2 + 1);
  const imaginary = new Float64Array(n / 2 + 1);
  for (let k = 0; k <= n / 2; k++) {
    real[k] = out[2 * k]!;
    imaginary[k] = out[2 * k + 1]!;
  }
  return { size: n, real, imaginary };
}

/**
 * The real values with a given spectrum: the inverse of {@linkcode realFourier}.
 *
 * @param spectrum Half spectrum of real values.
 * @returns `spectrum.size` values.
 *
 * @example
 * ```ts
 * import { inverseRealFourier, realFourier } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(inverseRealFourier(realFourier([3, 1, 4, 1]))[2]!, 4, 1e-15);
 * ```
 */
export function inverseRealFourier(spectrum: RealSpectrum): Float64Array {
  const { size, real, imaginary } = spectrum;
  const fft = new FFT(size);
  const whole: number[] = fft.createComplexArray();
  for (let k = 0; k <= size / 2; k++) {
    whole[2 * k] = real[k]!;
    whole[2 * k + 1] = imaginary[k]!;
  }
  fft.completeSpectrum(whole);
  const out: number[] = fft.createComplexArray();
  fft.inverseTransform(out, whole);
  return Float64Array.from({ length: size }, (_, i) => out[2 * i]!);
}

/**
 * Convolution of real values, without wrapping round: out[n] = Σ_k values[k] · kernel[n − k].
 *
 * @param values N values.
 * @param kernel M values.
 * @returns The full convolution, N + M − 1 values.
 * @throws {InputError} When either is empty.
 *
 * @example
 * ```ts
 * import { convolveReal } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const out = convolveReal([1, 2, 3], [1, 10]);
 * assertAlmostEquals(out[1]!, 12, 1e-13);
 * ```
 */
export function convolveReal(values: ArrayLike<number>, kernel: ArrayLike<number>): Float64Array {
  const length = values.length + kernel.length - 1;
  const a = realFourier(values, { size: length });
  const b = realFourier(kernel, { size: length });
  const real = a.real.map((re, k) => re * b.real[k]! - a.imaginary[k]! * b.imaginary[k]!);
  const imaginary = a.real.map((re, k) => re * b.imaginary[k]! + a.imaginary[k]! * b.real[k]!);
  return inverseRealFourier({ size: a.size, real, imaginary }).slice(0, length);
}
