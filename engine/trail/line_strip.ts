import type { SpectralLine } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { pixelEdges } from "./pixel_edges.ts";
import { lineVelocity } from "./velocity.ts";

/** The pixels of one exposure about a line, before normalisation. */
export interface LineStrip {
  /** The exposure. */
  readonly spectrum: Spectrum;
  /** Index of the first pixel in the spectrum. */
  readonly first: number;
  /** Velocity of each pixel's centre, N values, km/s, increasing. */
  readonly velocity_kms: Float64Array;
  /** Width of each pixel, N values, km/s. */
  readonly pixel_kms: Float64Array;
  /** Flux density in the file's unit, N values; 0 where masked. */
  readonly flux: Float64Array;
  /** One standard deviation, N values; infinite where masked. */
  readonly error: Float64Array;
}

/**
 * Cuts the pixels of one exposure about a line. A sample without a finite flux, or without a finite
 * positive error, is masked: its flux becomes 0 and its error infinite.
 *
 * @param spectrum The exposure.
 * @param line The line.
 * @param options Range of velocities kept, km/s.
 * @returns The strip; empty when the exposure has no pixel there.
 *
 * @example
 * ```ts
 * import { cutStrip } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const strip = cutStrip({
 *   source: "a.fits",
 *   group: 0,
 *   wavelength_angstrom: Float64Array.of(4990, 5000, 5010),
 *   flux: Float64Array.of(1, NaN, 1),
 *   error: Float64Array.of(0.1, 0.1, 0),
 *   errors_given: true,
 *   mid: [2460311, 0.5],
 *   exposure_s: 60,
 *   observer_factor: 1,
 *   resolution_angstrom: null,
 * }, { name: "x", vacuum_angstrom: 5000, air_angstrom: 4998.6, source: "none" }, { low_kms: -1000, high_kms: 1000 });
 * assertEquals(strip.error, Float64Array.of(0.1, Infinity, Infinity));
 * ```
 */
export function cutStrip(
  spectrum: Spectrum,
  line: SpectralLine,
  options: { readonly low_kms: number; readonly high_kms: number },
): LineStrip {
  const velocity = spectrum.wavelength_angstrom.map((wavelength) => lineVelocity(wavelength, line));
  const edges = velocity.length === 0 ? new Float64Array(1) : pixelEdges(velocity);
  let first = 0;
  while (first < velocity.length && velocity[first]! < options.low_kms) first++;
  let last = first;
  while (last < velocity.length && velocity[last]! <= options.high_kms) last++;
  const count = last - first;
  const pixel_kms = new Float64Array(count);
  const flux = new Float64Array(count);
  const error = new Float64Array(count).fill(Infinity);
  for (let i = 0; i < count; i++) {
    pixel_kms[i] = edges[first + i + 1]! - edges[first + i]!;
    const f = spectrum.flux[first + i]!;
    const s = spectrum.error[first + i]!;
    if (!Number.isFinite(f) || !Number.isFinite(s) || !(s > 0)) continue;
    flux[i] = f;
    error[i] = s;
  }
  return { spectrum, first, velocity_kms: velocity.slice(first, last), pixel_kms, flux, error };
}
