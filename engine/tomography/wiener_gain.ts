import { meanPower, type ProfileSpectra } from "./profile_filter.ts";

/** What {@linkcode wienerGain} must know of the noise and the geometry. */
export interface WienerOptions {
  /** Weight of each profile, R values adding up to one. */
  readonly weight: Float64Array;
  /** Noise variance of one profile summed over its bins, R values. */
  readonly noise: Float64Array;
  /** Diameter of the map, km/s. */
  readonly diameter_kms: number;
}

/**
 * Wiener's gain for back-projection, (power − noise) / power at each frequency, measured on the
 * profiles themselves. At a frequency k a map of diameter D is fixed by π D k profiles of a half orbit
 * (Crowther, DeRosier & Klug 1970, Proc. R. Soc. A 317, 319); where there are more, they share the
 * noise. The gain never rises with frequency and is 1 at zero, so that the flux is kept.
 *
 * @param spectra Spectra of the profiles.
 * @param options Weights, noise, size of the map.
 * @returns Gain as a function of frequency in cycles per km/s.
 *
 * @example Without noise nothing is held back
 * ```ts
 * import { profileSpectra, wienerGain } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const flux = Float64Array.of(0, 1, 0, 0);
 * const gain = wienerGain(profileSpectra({ rows: 1, columns: 4, step_kms: 10, flux }), {
 *   weight: Float64Array.of(1),
 *   noise: Float64Array.of(0),
 *   diameter_kms: 40,
 * });
 * assertAlmostEquals(gain(0.03), 1, 1e-12);
 * ```
 */
export function wienerGain(
  spectra: ProfileSpectra,
  options: WienerOptions,
): (cycles_per_kms: number) => number {
  const { size, step_kms } = spectra;
  const { weight, noise, diameter_kms } = options;
  const power = meanPower(spectra, weight);
  let floor = 0, squares = 0;
  weight.forEach((w, row) => {
    if (w === 0) return;
    floor += w * noise[row]!;
    squares += w * w;
  });
  const effective_rows = 1 / squares;
  const gain = new Float64Array(size / 2 + 1);
  let least = 1;
  for (let k = 0; k <= size / 2; k++) {
    const smooth = smoothed(power, k);
    const needed = Math.PI * diameter_kms * k / (size * step_kms);
    const signal = Math.max(0, smooth - floor);
    const shared = floor * Math.min(1, needed / effective_rows);
    least = Math.min(least, signal + shared === 0 ? 1 : signal / (signal + shared));
    gain[k] = least;
  }
  return (cycles_per_kms) => {
    const k = Math.min(size / 2, Math.abs(cycles_per_kms) * size * step_kms);
    const below = Math.min(size / 2 - 1, Math.floor(k));
    return gain[below]! + (k - below) * (gain[below + 1]! - gain[below]!);
  };
}

/** Mean over a window that widens with frequency, so that single noisy bins do not cut. */
function smoothed(power: Float64Array, k: number): number {
  const half = Math.ceil(k / 8);
  let sum = 0, count = 0;
  for (let i = Math.max(0, k - half); i <= Math.min(power.length - 1, k + half); i++) {
    sum += power[i]!;
    count++;
  }
  return sum / count;
}
