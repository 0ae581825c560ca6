import { InputError } from "../errors.ts";
import type { SpectralLine } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { lineWavelength } from "./velocity.ts";

/** Which exposures cover a line. */
export interface LineCoverage {
  /** Exposures that hold the rest wavelength and at least half of the reach. */
  readonly covering: readonly Spectrum[];
  /** Sources of those that hold only part of the reach. */
  readonly partly: readonly string[];
  /** Sources of those that do not cover the line. */
  readonly without: readonly string[];
  /**
   * Sources of those among them that are missed: others of their group cover the line, and no other
   * spectrum of the same moment does. An arm that shows other lines, and orders beside the line's
   * own, are not missed.
   */
  readonly missed: readonly string[];
}

function usableRange(spectrum: Spectrum): readonly [number, number] {
  const { wavelength_angstrom, flux } = spectrum;
  let first = 0;
  let last = flux.length - 1;
  while (first < last && !Number.isFinite(flux[first]!)) first++;
  while (last > first && !Number.isFinite(flux[last]!)) last--;
  return [wavelength_angstrom[first] ?? NaN, wavelength_angstrom[last] ?? NaN];
}

const momentOf = ({ group, mid: [whole, fraction] }: Spectrum) => `${group} ${whole} ${fraction}`;

function described(ranges: readonly (readonly [number, number])[]): string {
  const merged: [number, number][] = [];
  for (const [low, high] of ranges.toSorted((a, b) => a[0] - b[0])) {
    const last = merged.at(-1);
    if (last !== undefined && low <= last[1]) last[1] = Math.max(last[1], high);
    else merged.push([low, high]);
  }
  return merged.map(([low, high]) => `${low.toFixed(1)} to ${high.toFixed(1)}`).join(", ");
}

/**
 * Sorts out which exposures cover a line.
 *
 * @param spectra The exposures, at least one.
 * @param options The line and the velocities wanted on either side, km/s.
 * @returns Those that cover it, fully or partly, and those that do not.
 * @throws {InputError} When none does; it says what is covered.
 *
 * @example
 * ```ts
 * import { lineCoverage } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const line = { name: "x", vacuum_angstrom: 5000, air_angstrom: 4998.6, source: "none" };
 * const spectrum = {
 *   source: "a.fits",
 *   group: 0,
 *   wavelength_angstrom: Float64Array.of(4950, 5000, 5050),
 *   flux: Float64Array.of(1, 1, 1),
 *   error: Float64Array.of(0.1, 0.1, 0.1),
 *   errors_given: true,
 *   mid: [2460311, 0.5] as const,
 *   exposure_s: 60,
 *   observer_factor: 1,
 *   resolution_angstrom: null,
 * };
 * assertEquals(lineCoverage([spectrum], { line, reach_kms: 1000 }).covering.length, 1);
 * ```
 */
export function lineCoverage(
  spectra: readonly Spectrum[],
  options: { readonly line: SpectralLine; readonly reach_kms: number },
): LineCoverage {
  const { line, reach_kms } = options;
  const low = lineWavelength(-reach_kms, line);
  const high = lineWavelength(reach_kms, line);
  const covering: Spectrum[] = [];
  const partly: string[] = [];
  const without: Spectrum[] = [];
  const ranges = spectra.map(usableRange);
  spectra.forEach((spectrum, i) => {
    const [from, to] = ranges[i]!;
    const covered = (Math.min(high, to) - Math.max(low, from)) / (high - low);
    const rest = line.vacuum_angstrom;
    if (!(covered >= 0.5 && from <= rest && to >= rest)) {
      without.push(spectrum);
      return;
    }
    covering.push(spectrum);
    if (covered < 0.999) partly.push(spectrum.source);
  });
  if (covering.length === 0) {
    const known = ranges.filter(([from]) => Number.isFinite(from));
    throw new InputError({
      action: `make trail of ${line.name}`,
      rule: `an exposure must cover ${low.toFixed(1)} to ${high.toFixed(1)} angstrom in vacuum`,
      value: known.length === 0 ? "nothing" : described(known),
      unit: "angstrom",
      remedy: "name a line within what is covered",
    });
  }
  const groups = new Set(covering.map((one) => one.group));
  const moments = new Set(covering.map(momentOf));
  const missed = without.filter((one) => groups.has(one.group) && !moments.has(momentOf(one)));
  const sources = (of: readonly Spectrum[]) => of.map((one) => one.source);
  return { covering, partly, without: sources(without), missed: sources(missed) };
}
