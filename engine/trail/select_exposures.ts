import type { Warning } from "../errors.ts";
import { daysBetween } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { listed } from "./trail_warnings.ts";

/** Exposures fit for use, in order of time. */
export interface SelectedExposures {
  /** The exposures kept, in order of mid-exposure. */
  readonly spectra: readonly Spectrum[];
  /** What was dropped and why. */
  readonly warnings: readonly Warning[];
}

function isBlank({ flux, error }: Spectrum): boolean {
  let first: number | undefined;
  for (let i = 0; i < flux.length; i++) {
    if (!Number.isFinite(flux[i]!) || !Number.isFinite(error[i]!)) continue;
    if (first === undefined) first = flux[i]!;
    else if (flux[i] !== first) return false;
  }
  return true;
}

/** Whether there is something in the flux of a blank exposure: it is its errors that leave nothing usable. */
function lacksErrors({ flux, errors_given }: Spectrum): boolean {
  const seen = flux.filter(Number.isFinite);
  return errors_given && seen.some((value) => value !== seen[0]);
}

function isSame(a: Spectrum, b: Spectrum): boolean {
  return a.flux.length === b.flux.length && a.flux.every((f, i) => Object.is(f, b.flux[i])) &&
    Math.abs(a.wavelength_angstrom[0]! - b.wavelength_angstrom[0]!) < 1e-6;
}

// Two exposures of one detector cannot overlap in time; two reductions of one exposure do.
function isSimultaneous(a: Spectrum, b: Spectrum): boolean {
  const apart_s = Math.abs(daysBetween(b.mid, a.mid)) * 86400;
  const last = (s: Spectrum) => s.wavelength_angstrom[s.wavelength_angstrom.length - 1]!;
  return a.group === b.group && apart_s < 0.4 * Math.min(a.exposure_s, b.exposure_s) &&
    Math.min(last(a), last(b)) > Math.max(a.wavelength_angstrom[0]!, b.wavelength_angstrom[0]!);
}

/**
 * Puts exposures in order of time and drops those that say nothing: blank ones (no two usable
 * samples differ), those whose errors are all zero, and exact copies of an earlier one. Exposures of one group that overlap in time
 * and wavelength but differ are kept with a warning: they may be two reductions of one exposure.
 *
 * @param spectra Exposures in any order.
 * @returns The exposures kept and what there is to say.
 *
 * @example
 * ```ts
 * import { selectExposures } from "@millrace/millrace/trail";
 * import type { Spectrum } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const spectrum = (source: string, hour: number, level: number): Spectrum => ({
 *   source,
 *   group: 0,
 *   wavelength_angstrom: Float64Array.of(5000, 5001),
 *   flux: Float64Array.of(level, 2 * level),
 *   error: Float64Array.of(0.1, 0.1),
 *   errors_given: true,
 *   mid: [2460311, hour / 24],
 *   exposure_s: 60,
 *   observer_factor: 1,
 *   resolution_angstrom: null,
 * });
 * const { spectra, warnings } = selectExposures([spectrum("b", 2, 1), spectrum("a", 1, 1), spectrum("c", 3, 0)]);
 * assertEquals(spectra.map((s) => s.source), ["a", "b"]);
 * assertEquals(warnings.map((w) => w.code), ["blank-exposures", "exposures-reordered"]);
 * ```
 */
export function selectExposures(spectra: readonly Spectrum[]): SelectedExposures {
  const warnings: Warning[] = [];
  const blank = spectra.filter(isBlank);
  const drop = (dropped: readonly Spectrum[], code: string, why: string) => {
    if (dropped.length === 0) return;
    const text = `dropped ${why}: ${listed(dropped.map((s) => s.source))}`;
    warnings.push({ code, text });
  };
  drop(
    blank.filter((s) => !lacksErrors(s)),
    "blank-exposures",
    "as blank (no two usable samples differ)",
  );
  drop(
    blank.filter(lacksErrors),
    "exposures-without-errors",
    "as no two samples have an error above zero and are not masked (are the errors in the file all zero?)",
  );
  const full = spectra.filter((s) => !blank.includes(s));
  const sorted = full.toSorted((a, b) => daysBetween(a.mid, b.mid));
  // Groups follow one another however their times interlace: order counts within each.
  const last = new Map<number, Spectrum>();
  const late = full.filter((s) => {
    const before = last.get(s.group);
    last.set(s.group, s);
    return before !== undefined && daysBetween(s.mid, before.mid) < 0;
  });
  if (late.length > 0) {
    warnings.push({
      code: "exposures-reordered",
      text: `exposures were sorted by time, as some came before earlier ones: ${
        listed(late.map((s) => s.source))
      }`,
    });
  }
  const kept: Spectrum[] = [];
  const copies: string[] = [];
  const simultaneous: string[] = [];
  for (const spectrum of sorted) {
    const near = kept.slice(-8);
    const twin = near.find((other) =>
      isSame(other, spectrum) && Math.abs(daysBetween(spectrum.mid, other.mid)) * 86400 < 0.5
    );
    if (twin !== undefined) {
      copies.push(`${spectrum.source} (as ${twin.source})`);
      continue;
    }
    const rival = near.find((other) => isSimultaneous(other, spectrum));
    if (rival !== undefined) simultaneous.push(`${spectrum.source} and ${rival.source}`);
    kept.push(spectrum);
  }
  if (copies.length > 0) {
    warnings.push({
      code: "duplicate-exposures",
      text: `dropped as copies of another exposure: ${listed(copies)}`,
    });
  }
  if (simultaneous.length > 0) {
    warnings.push({
      code: "simultaneous-exposures",
      text:
        `overlap in time and wavelength within a group, perhaps two reductions of one exposure: ${
          listed(simultaneous)
        }`,
    });
  }
  return { spectra: kept, warnings };
}
