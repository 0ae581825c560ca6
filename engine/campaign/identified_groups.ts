import type { Spectrum } from "../spectra/mod.ts";
import {
  type IdentifiedLine,
  identifyLines,
  type MeanSpectrum,
  meanSpectrum,
  type Trail,
} from "../trail/mod.ts";

/** The mean spectrum of one group of exposures, and the lines seen in it. */
export interface IdentifiedGroup {
  /** Index of the `[[exposures]]` group, from 0. */
  readonly group: number;
  /** The mean spectrum. */
  readonly mean: MeanSpectrum;
  /** Lines of the list that it covers. */
  readonly identified: readonly IdentifiedLine[];
}

/** Half width within which lines are sought where no line of the target was measured, km/s. */
const USUAL_HALF_WIDTH_KMS = 500;

/**
 * Averages each group of exposures and looks for the lines of the list, as wide as the target's own.
 *
 * @param spectra All exposures.
 * @param measured The target's lines: their trails, and their full widths near zero, km/s.
 * @returns One entry a group that has a mean.
 */
export function identifiedGroups(
  spectra: readonly Spectrum[],
  measured: readonly { readonly trail: Trail; readonly full_width_kms: number }[],
): IdentifiedGroup[] {
  return [...Map.groupBy(spectra, ({ group }) => group)].flatMap(([group, members]) => {
    const mean = meanSpectrum(members);
    if (mean === null) return [];
    const widths = measured
      .filter(({ trail, full_width_kms }) => trail.group.includes(group) && full_width_kms > 0)
      .map(({ full_width_kms }) => full_width_kms / 2);
    const half_width_kms = Math.max(USUAL_HALF_WIDTH_KMS, ...widths);
    return [{ group, mean, identified: identifyLines(mean, { half_width_kms }) }];
  });
}
