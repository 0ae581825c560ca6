import { InputError, type Warning } from "../errors.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { lineCoverage, listed } from "../trail/mod.ts";
import { lineOf } from "./line_of.ts";
import type { Target } from "./target.ts";

const momentOf = ({ group, mid: [whole, fraction] }: Spectrum) => `${group} ${whole} ${fraction}`;

/**
 * Exposures of which no line of the target file makes use, as they do not cover any: of another
 * setting of the grating, or of a wrong folder. Orders beside that of a line are not counted.
 *
 * @param target The target, with its lines.
 * @param spectra All exposures.
 * @returns The warning; null when every exposure is of use, or there is no line.
 */
export function unusedExposures(target: Target, spectra: readonly Spectrum[]): Warning | null {
  const used = new Set<string>();
  for (const settings of target.settings.lines) {
    const options = { line: lineOf(settings, { target }), reach_kms: settings.reach_kms };
    try {
      for (const spectrum of lineCoverage(spectra, options).covering) used.add(momentOf(spectrum));
    } catch (error) {
      // A line that nothing covers is refused where its trail is made.
      if (!(error instanceof InputError)) throw error;
    }
  }
  if (used.size === 0) return null;
  const unused = spectra.filter((spectrum) => !used.has(momentOf(spectrum)));
  if (unused.length === 0) return null;
  return {
    code: "exposures-unused",
    text: `${unused.length} of ${spectra.length} exposures cover no line of the target file: ${
      listed(unused.map(({ source }) => source))
    }`,
  };
}
