import type { PhaseCurve, PlateSubject } from "../../figures/mod.ts";
import { randomStream } from "../../numerics/mod.ts";
import { spectralLines } from "../../sky/mod.ts";
import type { Spectrum } from "../../spectra/mod.ts";
import {
  identifyLines,
  meanSpectrum,
  type Measured,
  type MeasuredRow,
  measureTrail,
  type Trail,
} from "../../trail/mod.ts";

/** Stream of chance of the errors on plates. */
const STREAM = 700_000;

/** Equivalent width, V/R and continuum against phase, each exposure on its own. */
export function phaseCurves(
  trail: Trail,
  options: { seed: number },
): Required<Pick<PlateSubject, "equivalent_width" | "violet_red" | "continuum">> {
  const { exposures } = measureTrail(trail, { random: randomStream(options.seed, STREAM) });
  const curve = (pick: (row: MeasuredRow) => Measured): PhaseCurve[] => [{
    phase: exposures.map((row) => row.phase),
    value: exposures.map((row) => pick(row).value),
    error: exposures.map((row) => pick(row).error),
  }];
  return {
    equivalent_width: curve((row) => row.equivalent_width_angstrom),
    violet_red: curve((row) => row.profile.blue_over_red),
    continuum: curve((row) => row.continuum),
  };
}

/** Mean spectrum of the exposures that cover the line, with the lines seen in it. */
export function spectrumSubject(
  spectra: readonly Spectrum[],
  options: { trail: Trail },
): PlateSubject["spectrum"] {
  const groups = new Set(options.trail.group);
  const mean = meanSpectrum(spectra.filter(({ group }) => groups.has(group)));
  if (mean === null) return undefined;
  const seen = identifyLines(mean, { half_width_kms: 1200 }).filter((found) => found.seen)
    .filter((found) => found.equivalent_width_angstrom > 0)
    .map(({ line }) => line.name);
  return {
    wavelength_angstrom: mean.wavelength_angstrom,
    flux: mean.flux,
    error: mean.error,
    unit: "flux over its median",
    lines: spectralLines.filter(({ name }) => seen.includes(name)),
  };
}
