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

/** Options of {@linkcode filterProfiles}. */
export interface ProfileFilterOptions {
  /**
   * Gain at each frequency beside the ramp; `cycles_per_kms` from 0 to Nyquist.
   *
   * @default {() => 1}
   */
  readonly gain?: (cycles_per_kms: number) => number;
}

/**
 * Convolves profiles with the ramp kernel of filtered back-projection (Kak & Slaney 1988, ch. 3,
 * eq. 61): h[0] = 1/4, h[odd n] = −1/(πn)², h[even n] = 0, zero-padded so that nothing wraps round.
 * The kernel is made in velocity, not as |f|, so the level of the result is right. Two profiles
 * share one complex transform.
 *
 * @param profiles Profiles on a uniform grid.
 * @param options Further gain.
 * @returns Filtered profiles, R × C, unit of `flux` per bin.
 *
 * @example
 * ```ts
 * import { filterProfiles } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const flux = Float64Array.of(0, 0, 1, 0, 0);
 * const filtered = filterProfiles({ rows: 1, columns: 5, step_kms: 10, flux });
 * assertAlmostEquals(filtered[2] ?? NaN, 0.25, 1e-12);
 * assertAlmostEquals(filtered[3] ?? NaN, -1 / Math.PI ** 2, 1e-12);
 * ```
 */
export function filterProfiles(
  profiles: ProfileRows,
  options: ProfileFilterOptions = {},
): Float64Array {
  const { rows, columns, step_kms, flux } = profiles;
  const { gain = () => 1 } = options;
  const size = nextPowerOfTwo(2 * columns);
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
    const paired = row + 1 < rows;
    pair.fill(0);
    for (let c = 0; c < columns; c++) {
      pair[2 * c] = flux[row * columns + c]!;
      if (paired) pair[2 * c + 1] = flux[(row + 1) * columns + c]!;
    }
    fft.transform(spectrum, pair);
    for (let k = 0; k < size; k++) {
      spectrum[2 * k] = spectrum[2 * k]! * response[k]!;
      spectrum[2 * k + 1] = spectrum[2 * k + 1]! * response[k]!;
    }
    fft.inverseTransform(pair, spectrum);
    for (let c = 0; c < columns; c++) {
      filtered[row * columns + c] = pair[2 * c]!;
      if (paired) filtered[(row + 1) * columns + c] = pair[2 * c + 1]!;
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
