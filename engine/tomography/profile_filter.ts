import FFT from "fft.js";
import { nextPowerOfTwo } from "../numerics/mod.ts";

/** Profiles on one uniform velocity grid. */
export interface ProfileRows {
  /** Number of profiles, R. */
  readonly rows: number;
  /** Number of velocity bins, C. */
  readonly columns: number;
  /** Bin width, km/s. */
  readonly step_kms: number;
  /** Values, R × C row-major, stride C; all finite. */
  readonly flux: Float64Array;
}

/** Fourier transforms of zero-padded profiles, two real profiles in one complex transform. */
export interface ProfileSpectra {
  /** Number of profiles, R. */
  readonly rows: number;
  /** Number of velocity bins, C. */
  readonly columns: number;
  /** Bin width, km/s. */
  readonly step_kms: number;
  /** Length N of the transforms. */
  readonly size: number;
  /** ⌈R/2⌉ transforms, each N complex numbers, real and imaginary parts in turn. */
  readonly pairs: Float64Array;
}

/**
 * Transforms profiles, padded with at least as many zeros as they have bins.
 *
 * @param profiles Profiles on a uniform grid.
 * @returns Their spectra.
 *
 * @example
 * ```ts
 * import { profileSpectra } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const flux = Float64Array.of(1, 2, 3, 4, 5);
 * const { size, pairs } = profileSpectra({ rows: 1, columns: 5, step_kms: 10, flux });
 * assertEquals([size, pairs[0]], [16, 15]);
 * ```
 */
export function profileSpectra(profiles: ProfileRows): ProfileSpectra {
  const { rows, columns, step_kms, flux } = profiles;
  const size = nextPowerOfTwo(2 * columns);
  const fft = new FFT(size);
  const pairs = new Float64Array(2 * size * Math.ceil(rows / 2));
  const pair = new Float64Array(2 * size);
  for (let row = 0; row < rows; row += 2) {
    const first = row * columns, second = row + 1 < rows ? first + columns : -1;
    for (let c = 0; c < columns; c++) {
      pair[2 * c] = flux[first + c]!;
      pair[2 * c + 1] = second < 0 ? 0 : flux[second + c]!;
    }
    fft.transform(pairs.subarray(row * size, (row + 2) * size), pair);
  }
  return { rows, columns, step_kms, size, pairs };
}

/**
 * Weighted mean power of profiles at each frequency.
 *
 * @param spectra Spectra of R profiles.
 * @param weight Weights, R values.
 * @returns Σ w |F|² at frequencies 0 … N/2.
 *
 * @example
 * ```ts
 * import { meanPower, profileSpectra } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const flux = Float64Array.of(1, 2, 3, 0, 0, 1);
 * const spectra = profileSpectra({ rows: 2, columns: 3, step_kms: 10, flux });
 * const power = meanPower(spectra, Float64Array.of(0.5, 0.5));
 * assertAlmostEquals(power[0] ?? NaN, 0.5 * 36 + 0.5, 1e-12);
 * ```
 */
export function meanPower(spectra: ProfileSpectra, weight: Float64Array): Float64Array {
  const { rows, size, pairs } = spectra;
  const power = new Float64Array(size / 2 + 1);
  for (let row = 0; row < rows; row += 2) {
    const first = weight[row]!, second = row + 1 < rows ? weight[row + 1]! : 0;
    const from = row * size;
    for (let k = 0; k <= size / 2; k++) {
      const mirror = from + 2 * ((size - k) % size), here = from + 2 * k;
      const xr = pairs[here]!, xi = pairs[here + 1]!;
      const yr = pairs[mirror]!, yi = pairs[mirror + 1]!;
      const a = (xr + yr) ** 2 + (xi - yi) ** 2, b = (xi + yi) ** 2 + (yr - xr) ** 2;
      power[k] = power[k]! + 0.25 * (first * a + second * b);
    }
  }
  return power;
}

/** Options of {@linkcode filterSpectra}. */
export interface ProfileFilterOptions {
  /**
   * Gain at each frequency beside the ramp; `cycles_per_kms` from 0 to Nyquist.
   *
   * @default {() => 1}
   */
  readonly gain?: (cycles_per_kms: number) => number;
  /**
   * Factor of each profile, R values.
   *
   * @default {1}
   */
  readonly scale?: Float64Array;
}

/**
 * Convolves profiles with the ramp kernel of filtered back-projection (Kak & Slaney 1988, ch. 3,
 * eq. 61): h[0] = 1/4, h[odd n] = −1/(πn)², h[even n] = 0, zero-padded so that nothing wraps round.
 * The kernel is made in velocity, not as |f|, so the level of the result is right.
 *
 * @param spectra Spectra of the profiles.
 * @param options Further gain, factors.
 * @returns Filtered profiles, R × C, unit of `flux` per bin.
 *
 * @example
 * ```ts
 * import { filterSpectra, profileSpectra } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const flux = Float64Array.of(0, 0, 1, 0, 0);
 * const filtered = filterSpectra(profileSpectra({ rows: 1, columns: 5, step_kms: 10, flux }));
 * assertAlmostEquals(filtered[2] ?? NaN, 0.25, 1e-12);
 * assertAlmostEquals(filtered[3] ?? NaN, -1 / Math.PI ** 2, 1e-12);
 * ```
 */
export function filterSpectra(
  spectra: ProfileSpectra,
  options: ProfileFilterOptions = {},
): Float64Array {
  const { rows, columns, step_kms, size, pairs } = spectra;
  const { gain = () => 1, scale } = options;
  const fft = new FFT(size);
  const response = rampResponse(fft, size);
  for (let k = 0; k <= size / 2; k++) {
    const g = gain(k / (size * step_kms));
    response[k] = response[k]! * g;
    if (k > 0 && k < size / 2) response[size - k] = response[size - k]! * g;
  }
  const filtered = new Float64Array(rows * columns);
  const pair = new Float64Array(2 * size), spectrum = new Float64Array(2 * size);
  for (let row = 0; row < rows; row += 2) {
    const from = row * size;
    for (let k = 0; k < size; k++) {
      const r = response[k]!;
      spectrum[2 * k] = pairs[from + 2 * k]! * r;
      spectrum[2 * k + 1] = pairs[from + 2 * k + 1]! * r;
    }
    fft.inverseTransform(pair, spectrum);
    const first = scale?.[row] ?? 1, second = scale?.[row + 1] ?? 1;
    const into = row * columns, next = row + 1 < rows ? into + columns : -1;
    for (let c = 0; c < columns; c++) {
      filtered[into + c] = first * pair[2 * c]!;
      if (next >= 0) filtered[next + c] = second * pair[2 * c + 1]!;
    }
  }
  return filtered;
}

function rampResponse(fft: FFT, size: number): Float64Array {
  const kernel = new Float64Array(2 * size), spectrum = new Float64Array(2 * size);
  kernel[0] = 0.25;
  for (let n = 1; n <= size / 2; n += 2) {
    kernel[2 * n] = kernel[2 * (size - n)] = -1 / (Math.PI * n) ** 2;
  }
  fft.transform(spectrum, kernel);
  return Float64Array.from({ length: size }, (_, k) => spectrum[2 * k]!);
}
