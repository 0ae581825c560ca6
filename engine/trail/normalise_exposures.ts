import type { Spectrum } from "../spectra/mod.ts";
import type { VelocityRange } from "./continuum.ts";
import { fitContinuum } from "./continuum.ts";
import { cutStrip } from "./line_strip.ts";
import { normalise, type NormalisedStrip } from "./normalise.ts";
import type { TrailOptions } from "./trail_options.ts";
import type { WarningList } from "./trail_warnings.ts";

/** Fewest standard deviations by which a continuum must be seen before one may divide by it. */
const FAINTEST_CONTINUUM = 3;

/**
 * Cuts each exposure about the line, fits its continuum and normalises it. What cannot be
 * normalised is dropped with a warning.
 *
 * @param spectra Exposures that cover the line, masked.
 * @param options Options of the trail with reach and windows settled, and where to say things.
 * @returns The normalised strips, in the same order.
 * @throws {InputError} When photometry is given that cannot be used.
 *
 * @example
 * ```ts
 * import { normaliseExposures, warningsOf } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * const strips = normaliseExposures([], {
 *   line: lineNamed("H beta"),
 *   ephemeris: null as never,
 *   reach_kms: 1000,
 *   continuum_kms: [[2000, 3000]],
 *   warnings: warningsOf("H beta"),
 * });
 * assertEquals(strips, []);
 * ```
 */
export function normaliseExposures(
  spectra: readonly Spectrum[],
  options: TrailOptions & {
    readonly reach_kms: number;
    readonly continuum_kms: readonly VelocityRange[];
    readonly warnings: WarningList;
  },
): readonly NormalisedStrip[] {
  const { line, reach_kms, continuum_kms, continuum_order: order = 1, warnings } = options;
  const edges = [-reach_kms, reach_kms, ...continuum_kms.flat()];
  const range = { low_kms: Math.min(...edges), high_kms: Math.max(...edges) };
  const { continuum: how, photometry } = options;
  const divided = (group: number) =>
    how !== "scale" ||
    (Array.isArray(photometry) ? photometry[group] ?? undefined : photometry) !== undefined;

  const unfitted: string[] = [];
  const faint: string[] = [];
  const flattened: string[] = [];
  const pairs = spectra.flatMap((spectrum) => {
    const strip = cutStrip(spectrum, line, range);
    const continuum = fitContinuum(strip, { windows_kms: continuum_kms, order });
    if (continuum === null) {
      unfitted.push(spectrum.source);
      return [];
    }
    if (
      divided(spectrum.group) && !(continuum.at_line > FAINTEST_CONTINUUM * continuum.at_line_error)
    ) {
      faint.push(spectrum.source);
      return [];
    }
    if (continuum.order < order) flattened.push(spectrum.source);
    return [{ strip, continuum }];
  });
  warnings.about(
    "continuum-not-covered",
    "dropped as they hold too few pixels of the continuum windows",
    unfitted,
  );
  warnings.about(
    "continuum-not-seen",
    "dropped as their continuum is not seen at 3 sigma and cannot be divided out",
    faint,
  );
  warnings.about(
    "continuum-one-sided",
    "show the continuum on one side of the line only, so its slope was left out",
    flattened,
  );
  if (pairs.length === 0) return [];
  const { strips, unscaled } = normalise(pairs, options);
  warnings.about(
    "photometry-missing",
    "dropped as the light curve does not reach them",
    unscaled,
  );
  return strips;
}
