import { median, robustSigma } from "../numerics/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { pixelEdges } from "./pixel_edges.ts";
import { rebin } from "./rebin.ts";

/** The mean spectrum of exposures that share a set-up. */
export interface MeanSpectrum {
  /** Pixel centres, N values, vacuum, barycentric, Å: those of the first exposure. */
  readonly wavelength_angstrom: Float64Array;
  /** Mean of the exposures, each divided by its own median; NaN where fewer than half show it. */
  readonly flux: Float64Array;
  /** One standard deviation from the scatter of the exposures; infinite where there is none. */
  readonly error: Float64Array;
  /** Number of exposures. */
  readonly exposures: number;
}

/** Deviation beyond which a single exposure's pixel is left out, standard deviations. */
const CLIP = 8;
/** Largest share of the exposures that may be left out at a pixel: what is in more of them is real. */
const SHARE = 0.05;

// Leaves out what struck a pixel in one exposure, or in very few: cosmic rays, bad pixels.
function withoutHits(values: readonly { flux: number; error: number }[]): number[] {
  const fluxes = values.map(({ flux }) => flux);
  if (values.length < 5) return fluxes;
  const middle = median(fluxes);
  const scatter = robustSigma(fluxes, middle);
  const off = ({ flux, error }: { flux: number; error: number }) =>
    Math.abs(flux - middle) > CLIP * Math.max(scatter, error);
  const hits = values.filter(off).length;
  if (hits === 0 || hits > Math.max(1, SHARE * values.length)) return fluxes;
  return values.filter((value) => !off(value)).map(({ flux }) => flux);
}

/**
 * Averages exposures in wavelength, not following any motion: for the identification of lines and
 * a first look. Exposures count the same whatever their signal. What deviates by eight standard
 * deviations in one exposure in twenty or fewer is left out.
 *
 * @param spectra Exposures of one set-up.
 * @returns Their mean; null when there is none with a positive median.
 *
 * @example
 * ```ts
 * import { meanSpectrum } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const spectrum = (level: number) => ({
 *   source: "a",
 *   group: 0,
 *   wavelength_angstrom: Float64Array.of(5000, 5001, 5002),
 *   flux: Float64Array.of(level, level, 3 * level),
 *   error: Float64Array.of(1, 1, 1),
 *   errors_given: true,
 *   mid: [2460311, 0] as const,
 *   exposure_s: 60,
 *   observer_factor: null,
 *   resolution_angstrom: null,
 * });
 * assertEquals(meanSpectrum([spectrum(1), spectrum(10)])!.flux, Float64Array.of(1, 1, 3));
 * ```
 */
export function meanSpectrum(spectra: readonly Spectrum[]): MeanSpectrum | null {
  const scaled = spectra.flatMap((spectrum) => {
    const good = spectrum.flux.filter((f, i) =>
      Number.isFinite(f) && Number.isFinite(spectrum.error[i]!)
    );
    const level = good.length === 0 ? NaN : median(good);
    return level > 0 ? [{ spectrum, level }] : [];
  });
  if (scaled.length === 0) return null;
  const wavelength_angstrom = scaled[0]!.spectrum.wavelength_angstrom;
  const edges = pixelEdges(wavelength_angstrom);
  const rows = scaled.map(({ spectrum, level }) =>
    rebin({
      edges: pixelEdges(spectrum.wavelength_angstrom),
      flux: spectrum.flux.map((f) => f / level),
      error: spectrum.error.map((e) => e / level),
    }, edges)
  );
  const flux = new Float64Array(wavelength_angstrom.length).fill(NaN);
  const error = new Float64Array(wavelength_angstrom.length).fill(Infinity);
  for (let i = 0; i < flux.length; i++) {
    const shown = rows.map((row) => ({ flux: row.flux[i]!, error: row.error[i]! }))
      .filter((one) => Number.isFinite(one.flux));
    if (shown.length < 0.5 * rows.length) continue;
    const values = withoutHits(shown);
    const mean = values.reduce((a, b) => a + b, 0) / values.length;
    flux[i] = mean;
    if (values.length < 2) continue;
    const variance = values.reduce((sum, f) => sum + (f - mean) ** 2, 0) / (values.length - 1);
    error[i] = Math.sqrt(variance / values.length);
  }
  return { wavelength_angstrom, flux, error, exposures: rows.length };
}
