import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { median } from "../numerics/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import type { ZeroShift } from "./wavelength_zero.ts";

const C = SPEED_OF_LIGHT_KMS.value;

/** Options of {@linkcode measureTelluric}. */
export interface TelluricOptions {
  /** Ranges of telluric absorption, vacuum, observer's frame, Å. */
  readonly ranges_angstrom: readonly (readonly [number, number])[];
  /**
   * Largest shift that is sought, km/s.
   * @default 150
   */
  readonly largest_kms?: number;
}

/**
 * Measures shifts of wavelength between exposures from telluric absorption, by matching each to the
 * mean of all in the observer's frame. These shifts are relative: their mean is zero.
 *
 * @param spectra Exposures on barycentric wavelengths.
 * @param options Ranges of absorption, largest shift.
 * @returns One shift an exposure.
 *
 * @example
 * ```ts
 * import { measureTelluric } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(measureTelluric([], { ranges_angstrom: [[7600, 7700]] }), []);
 * ```
 */
export function measureTelluric(
  spectra: readonly Spectrum[],
  options: TelluricOptions,
): ZeroShift[] {
  const { ranges_angstrom, largest_kms = 150 } = options;
  const step = 5;
  const grids = ranges_angstrom.map(([low, high]) => {
    const n = Math.floor(C * Math.log(high / low) / step);
    return { low, n };
  });
  // Each spectrum on one logarithmic grid a range, flattened by its own line.
  const rows = spectra.map((spectrum) => {
    if (spectrum.observer_factor === null) return null;
    const { wavelength_angstrom: w, flux, error } = spectrum;
    const values = grids.flatMap(({ low, n }) => {
      const part: number[] = [];
      let at = 0;
      for (let k = 0; k < n; k++) {
        const wanted = low * Math.exp(k * step / C) * spectrum.observer_factor!;
        while (at + 1 < w.length && w[at + 1]! < wanted) at++;
        if (
          w[at]! > wanted || at + 1 >= w.length || !Number.isFinite(error[at]! + error[at + 1]!)
        ) return [NaN];
        const t = (wanted - w[at]!) / (w[at + 1]! - w[at]!);
        part.push((1 - t) * flux[at]! + t * flux[at + 1]!);
      }
      const level = median(part);
      return part.map((f) => f / level - 1);
    });
    return values.some((v) => !Number.isFinite(v)) || values.length === 0 ? null : values;
  });
  const known = rows.filter((row) => row !== null);
  const mean = known.length === 0
    ? []
    : known[0]!.map((_, k) => known.reduce((sum, row) => sum + row[k]!, 0) / known.length);
  const lags = Math.ceil(largest_kms / step);
  return spectra.map(({ source }, index) => {
    const row = rows[index]!;
    const none = { source, shift_kms: NaN, error_kms: NaN, features: 0 };
    if (row === null || known.length < 3) return none;
    // Least squares against the shifted mean; the minimum by a parabola.
    const chi: number[] = [];
    for (let lag = -lags; lag <= lags; lag++) {
      let sum = 0;
      for (let k = lags; k < row.length - lags; k++) sum += (row[k + lag]! - mean[k]!) ** 2;
      chi.push(sum);
    }
    const best = chi.indexOf(Math.min(...chi));
    const [a, b, c] = [chi[best - 1], chi[best]!, chi[best + 1]];
    if (a === undefined || c === undefined) return none;
    const curve = a - 2 * b + c;
    if (!(curve > 0)) return none;
    const shift_kms = step * (best - lags + 0.5 * (a - c) / curve);
    // Residuals are oversampled by the pixel over the step: counted as one sample a pixel.
    const variance = b / (row.length - 2 * lags);
    const pixel = C *
      (spectra[index]!.wavelength_angstrom[1]! / spectra[index]!.wavelength_angstrom[0]! - 1);
    const error_kms = step * Math.sqrt(2 * variance / curve * Math.max(1, pixel / step));
    return { source, shift_kms, error_kms, features: ranges_angstrom.length };
  });
}
