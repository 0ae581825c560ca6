import { median } from "../numerics/mod.ts";
import { type SpectralLine, spectralLines } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { pixelEdges } from "./pixel_edges.ts";
import { rebin } from "./rebin.ts";
import { lineVelocity } from "./velocity.ts";

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

/**
 * Averages exposures in wavelength, not following any motion: for the identification of lines and
 * a first look. Exposures count the same whatever their signal.
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
      error: spectrum.error,
    }, edges).flux
  );
  const flux = new Float64Array(wavelength_angstrom.length).fill(NaN);
  const error = new Float64Array(wavelength_angstrom.length).fill(Infinity);
  for (let i = 0; i < flux.length; i++) {
    const values = rows.map((row) => row[i]!).filter((f) => Number.isFinite(f));
    if (values.length < 0.5 * rows.length) continue;
    const mean = values.reduce((a, b) => a + b, 0) / values.length;
    flux[i] = mean;
    if (values.length < 2) continue;
    const variance = values.reduce((sum, f) => sum + (f - mean) ** 2, 0) / (values.length - 1);
    error[i] = Math.sqrt(variance / values.length);
  }
  return { wavelength_angstrom, flux, error, exposures: rows.length };
}

/** A line of the list looked for in a mean spectrum. */
export interface IdentifiedLine {
  /** The line. */
  readonly line: SpectralLine;
  /** Equivalent width, Å, emission positive. */
  readonly equivalent_width_angstrom: number;
  /** Its standard deviation, Å. */
  readonly error_angstrom: number;
  /** Whether it is seen at 5σ. */
  readonly seen: boolean;
  /** Other lines of the list within the range of integration: the width is shared with them. */
  readonly blended_with: readonly string[];
}

/**
 * Looks for every line of the list in a mean spectrum.
 *
 * @param mean The mean spectrum.
 * @param options Half width of the integration, km/s; the continuum comes from as much on each side.
 * @returns The lines covered, in order of wavelength.
 *
 * @example
 * ```ts
 * import { identifyLines } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assert } from "@std/assert";
 *
 * const rest = lineNamed("H beta").vacuum_angstrom;
 * const wavelength_angstrom = Float64Array.from({ length: 400 }, (_, i) => 4760 + 0.5 * i);
 * const found = identifyLines({
 *   wavelength_angstrom,
 *   flux: wavelength_angstrom.map((w) => 1 + Math.exp(-(((w - rest) / 8) ** 2))),
 *   error: wavelength_angstrom.map(() => 0.02),
 *   exposures: 10,
 * }, { half_width_kms: 1500 });
 * assert(found.find((f) => f.line.name === "H beta")!.seen);
 * ```
 */
export function identifyLines(
  mean: MeanSpectrum,
  options: { readonly half_width_kms: number },
): IdentifiedLine[] {
  const { half_width_kms } = options;
  const { wavelength_angstrom: w, flux, error } = mean;
  const edges = pixelEdges(w);
  const sorted = spectralLines.toSorted((a, b) => a.vacuum_angstrom - b.vacuum_angstrom);
  return sorted.flatMap((line): IdentifiedLine[] => {
    const inside: number[] = [];
    const beside: number[] = [];
    w.forEach((wavelength, i) => {
      if (!Number.isFinite(flux[i]!) || !Number.isFinite(error[i]!)) return;
      const v = Math.abs(lineVelocity(wavelength, line));
      if (v <= half_width_kms) inside.push(i);
      else if (v <= 2 * half_width_kms) beside.push(i);
    });
    const covered = line.vacuum_angstrom > w[0]! && line.vacuum_angstrom < w[w.length - 1]!;
    if (!covered || inside.length < 3 || beside.length < 3) return [];
    const level = median(beside.map((i) => flux[i]!));
    let width = 0, variance = 0, length = 0;
    for (const i of inside) {
      const pixel = edges[i + 1]! - edges[i]!;
      width += (flux[i]! / level - 1) * pixel;
      variance += (error[i]! / level * pixel) ** 2;
      length += pixel;
    }
    // The median of n samples has 1.25 times the error of their mean.
    const beneath = 1.253 * median(beside.map((i) => error[i]!)) / level / Math.sqrt(beside.length);
    const error_angstrom = Math.sqrt(variance + (length * beneath) ** 2);
    const blended_with = sorted
      .filter((other) =>
        other !== line && Math.abs(lineVelocity(other.vacuum_angstrom, line)) < half_width_kms
      )
      .map((other) => other.name);
    return [{
      line,
      equivalent_width_angstrom: width,
      error_angstrom,
      seen: Math.abs(width) > 5 * error_angstrom,
      blended_with,
    }];
  });
}
