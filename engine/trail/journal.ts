import { type Ephemeris, orbitalPhase } from "../binary/mod.ts";
import { median } from "../numerics/mod.ts";
import { daysBetween, type SplitDate } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";

/** One line of a journal of observations: one night of one set-up. */
export interface JournalEntry {
  /** Index of the `[[exposures]]` group. */
  readonly group: number;
  /** First mid-exposure, BJD(TDB). */
  readonly first: SplitDate;
  /** Last mid-exposure, BJD(TDB). */
  readonly last: SplitDate;
  /** Number of exposures. */
  readonly exposures: number;
  /** Shortest exposure, s. */
  readonly shortest_s: number;
  /** Longest exposure, s. */
  readonly longest_s: number;
  /** First wavelength, vacuum, Å. */
  readonly from_angstrom: number;
  /** Last wavelength, vacuum, Å. */
  readonly to_angstrom: number;
  /** Median pixel, Å. */
  readonly pixel_angstrom: number;
  /** Median resolution, full width at half maximum, Å; null when not known. */
  readonly resolution_angstrom: number | null;
  /** Median of flux over error of a pixel. */
  readonly signal_to_noise_pixel: number;
  /** Orbits from the first to the last mid-exposure; null without an ephemeris. */
  readonly orbits: number | null;
  /** Orbits since the zero at the first mid-exposure; null without an ephemeris. */
  readonly first_orbit: number | null;
}

/** Nights are told apart by gaps of at least this long, d. */
const BETWEEN_NIGHTS_D = 0.3;

function entryOf(spectra: readonly Spectrum[], ephemeris: Ephemeris | undefined): JournalEntry {
  const [first, last] = [spectra[0]!, spectra[spectra.length - 1]!];
  const ends = spectra.map(({ wavelength_angstrom: w }) => [w[0]!, w[w.length - 1]!] as const);
  const pixels = spectra.map(({ wavelength_angstrom: w }) =>
    (w[w.length - 1]! - w[0]!) / (w.length - 1)
  );
  const ratios = spectra.flatMap(({ flux, error }) => {
    const good = [...flux.keys()].filter((i) => Number.isFinite(flux[i]! / error[i]!));
    return good.length === 0 ? [] : [median(good.map((i) => flux[i]! / error[i]!))];
  });
  const widths = spectra.flatMap(({ resolution_angstrom: r }) => r === null ? [] : [median(r)]);
  const orbit = (mid: SplitDate) => {
    if (ephemeris === undefined) return null;
    const { cycle, phase } = orbitalPhase(ephemeris, mid);
    return cycle + phase;
  };
  const [a, b] = [orbit(first.mid), orbit(last.mid)];
  return {
    group: first.group,
    first: first.mid,
    last: last.mid,
    exposures: spectra.length,
    shortest_s: Math.min(...spectra.map((s) => s.exposure_s)),
    longest_s: Math.max(...spectra.map((s) => s.exposure_s)),
    from_angstrom: Math.min(...ends.map((e) => e[0])),
    to_angstrom: Math.max(...ends.map((e) => e[1])),
    pixel_angstrom: median(pixels),
    resolution_angstrom: widths.length === 0 ? null : median(widths),
    signal_to_noise_pixel: ratios.length === 0 ? NaN : median(ratios),
    orbits: a === null || b === null ? null : b - a,
    first_orbit: a,
  };
}

/**
 * The journal of observations, as papers print it: one entry for each night of each set-up.
 *
 * @param spectra Exposures in any order.
 * @param options The ephemeris, where it is known.
 * @returns Entries in order of time.
 *
 * @example
 * ```ts
 * import { journalOf } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const spectrum = (day: number) => ({
 *   source: "a",
 *   group: 0,
 *   wavelength_angstrom: Float64Array.of(5000, 5001, 5002),
 *   flux: Float64Array.of(1, 1, 3),
 *   error: Float64Array.of(0.1, 0.1, 0.1),
 *   errors_given: true,
 *   mid: [2460311 + day, 0.5] as const,
 *   exposure_s: 60,
 *   observer_factor: null,
 *   resolution_angstrom: null,
 * });
 * assertEquals(journalOf([spectrum(1), spectrum(0)]).map((entry) => entry.exposures), [1, 1]);
 * ```
 */
export function journalOf(
  spectra: readonly Spectrum[],
  options: { readonly ephemeris?: Ephemeris } = {},
): JournalEntry[] {
  const groups = Map.groupBy(
    spectra.toSorted((a, b) => daysBetween(a.mid, b.mid)),
    (spectrum) => spectrum.group,
  );
  const nights = [...groups.values()].flatMap((members) => {
    const out: Spectrum[][] = [];
    for (const spectrum of members) {
      const last = out.at(-1)?.at(-1);
      if (last !== undefined && daysBetween(spectrum.mid, last.mid) < BETWEEN_NIGHTS_D) {
        out.at(-1)!.push(spectrum);
      } else out.push([spectrum]);
    }
    return out;
  });
  return nights.map((night) => entryOf(night, options.ephemeris))
    .sort((a, b) => daysBetween(a.first, b.first) || a.group - b.group);
}
