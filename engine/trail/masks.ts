import type { Spectrum } from "../spectra/mod.ts";

/** A range of wavelengths that is not to be used, fixed in the observer's frame. */
export interface ObservedMask {
  /** What is there, as in "telluric O2 A". */
  readonly name: string;
  /** Lower end, vacuum, observer's frame, Å. */
  readonly low_angstrom: number;
  /** Upper end, vacuum, observer's frame, Å. */
  readonly high_angstrom: number;
}

/** The spectra with masks set, and what was set. */
export interface MaskedSpectra {
  /** The spectra, with infinite error where masked. */
  readonly spectra: readonly Spectrum[];
  /** Samples newly masked. */
  readonly masked: number;
  /** Sources of spectra whose observer's frame is not known: there the masks were widened. */
  readonly widened: readonly string[];
}

// The Earth moves at up to 30.3 km/s about the Sun and its surface at 0.46 km/s.
const LARGEST_BARYCENTRIC_SHIFT = 30.8 / 299792.458;

/**
 * Masks ranges of wavelengths that stand still in the observer's frame: night-sky lines, telluric
 * bands. Where the observer's frame cannot be had, the masks are widened by the largest possible
 * barycentric shift, so that nothing slips through.
 *
 * @param spectra Spectra on barycentric wavelengths.
 * @param masks What to mask, in the observer's frame.
 * @returns New spectra; a masked sample has infinite error and keeps its flux.
 *
 * @example
 * ```ts
 * import { maskObserved } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const { spectra, masked } = maskObserved([{
 *   source: "a.fits",
 *   group: 0,
 *   wavelength_angstrom: Float64Array.of(5000, 5001, 5002),
 *   flux: Float64Array.of(1, 1, 1),
 *   error: Float64Array.of(0.1, 0.1, 0.1),
 *   errors_given: true,
 *   mid: [2460311, 0.5],
 *   exposure_s: 60,
 *   observer_factor: 1.0001,
 *   resolution_angstrom: null,
 * }], [{ name: "sky line", low_angstrom: 5000.2, high_angstrom: 5000.7 }]);
 * assertEquals(spectra[0]!.error, Float64Array.of(0.1, Infinity, 0.1));
 * assertEquals(masked, 1);
 * ```
 */
export function maskObserved(
  spectra: readonly Spectrum[],
  masks: readonly ObservedMask[],
): MaskedSpectra {
  if (masks.length === 0) return { spectra, masked: 0, widened: [] };
  let masked = 0;
  const widened: string[] = [];
  const out = spectra.map((spectrum) => {
    const known = spectrum.observer_factor !== null;
    if (!known) widened.push(spectrum.source);
    const factor = spectrum.observer_factor ?? 1;
    const margin = known ? 0 : LARGEST_BARYCENTRIC_SHIFT;
    const ranges = masks.map(({ low_angstrom, high_angstrom }) => [
      low_angstrom * factor * (1 - margin),
      high_angstrom * factor * (1 + margin),
    ]);
    const error = spectrum.error.map((value, i) => {
      const wavelength = spectrum.wavelength_angstrom[i]!;
      if (!ranges.some(([low, high]) => wavelength >= low! && wavelength <= high!)) return value;
      if (Number.isFinite(value)) masked++;
      return Infinity;
    });
    return { ...spectrum, error };
  });
  return { spectra: out, masked, widened };
}
