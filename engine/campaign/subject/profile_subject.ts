import type { PhaseCurve, PlateSubject } from "../../figures/mod.ts";
import { randomStream } from "../../numerics/mod.ts";
import type { Spectrum } from "../../spectra/mod.ts";
import {
  identifyLines,
  meanSpectrum,
  type Measured,
  type MeasuredRow,
  measureTrail,
  type Trail,
  type TrailMeasurements,
} from "../../trail/mod.ts";
import type { IdentifiedGroup } from "../identified_groups.ts";

/** Half width within which lines are sought, km/s. */
const HALF_WIDTH_KMS = 1200;

/** Stream of chance of the errors on plates. */
const STREAM = 700_000;

/** What plates show against phase. */
export type PhaseCurves = Required<
  Pick<PlateSubject, "equivalent_width" | "violet_red" | "continuum">
>;

/** Equivalent width, V/R and continuum against phase, each exposure on its own. */
export function phaseCurves(trail: Trail, options: { seed: number }): PhaseCurves {
  return curvesOf(measureTrail(trail, { random: randomStream(options.seed, STREAM) }));
}

/** The same of a trail that has been measured. */
export function curvesOf({ exposures }: TrailMeasurements): PhaseCurves {
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
  return spectrumOf({ mean, identified: identifyLines(mean, { half_width_kms: HALF_WIDTH_KMS }) });
}

/** A mean spectrum with the lines that are seen in it. */
export function spectrumOf(
  group: Pick<IdentifiedGroup, "mean" | "identified">,
): NonNullable<PlateSubject["spectrum"]> {
  const { mean, identified } = group;
  return {
    wavelength_angstrom: mean.wavelength_angstrom,
    flux: mean.flux,
    error: mean.error,
    unit: "flux over its median",
    lines: identified.filter(({ seen }) => seen).map(({ line }) => line),
  };
}
