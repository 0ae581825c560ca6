import { InputError } from "../errors.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { continuumWindows } from "./continuum_windows.ts";
import { makeGrid } from "./display_grid.ts";
import { foldExposure } from "./fold.ts";
import { groupNoise } from "./group_noise.ts";
import { lineCoverage } from "./line_coverage.ts";
import { maskCosmicRays } from "./mask_cosmic_rays.ts";
import { maskObserved } from "./masks.ts";
import { nativeSamples } from "./native_samples.ts";
import type { NormalisedStrip } from "./normalise.ts";
import { normaliseExposures } from "./normalise_exposures.ts";
import { inPhaseRanges } from "./phase_ranges.ts";
import { FWHM_OVER_SIGMA, profileWidth } from "./profile_width.ts";
import { requireTrailOptions } from "./require_trail_options.ts";
import { selectExposures } from "./select_exposures.ts";
import type { Trail } from "./trail.ts";
import type { TrailOptions } from "./trail_options.ts";
import { type WarningList, warningsOf } from "./trail_warnings.ts";

function nothingLeft(rule: string, warnings: WarningList, line: string): InputError {
  const reasons = warnings.said.map((w) => w.text).join("; ");
  return new InputError({
    action: `make trail of ${line}`,
    rule,
    value: 0,
    ...(reasons === "" ? {} : { remedy: reasons }),
  });
}

// The exposures that cover the line, outside the phases that are skipped, masked.
function chooseExposures(
  spectra: readonly Spectrum[],
  options: TrailOptions & { readonly reach_kms: number; readonly warnings: WarningList },
): readonly Spectrum[] {
  const { line, ephemeris, reach_kms, skip_phases = [], masks = [], warnings } = options;
  if (spectra.length === 0) {
    throw nothingLeft("at least one exposure must hold a spectrum", warnings, line.name);
  }
  const { covering, partly, missed } = lineCoverage(spectra, { line, reach_kms });
  warnings.about(
    "line-not-covered",
    `${missed.length} exposures do not cover the line, as others of their group do, and are left out`,
    missed,
  );
  warnings.about("line-partly-covered", `hold only part of ±${reach_kms} km/s`, partly);
  const open = covering.filter((s) =>
    !inPhaseRanges(foldExposure(s, ephemeris).phase, skip_phases)
  );
  if (open.length === 0) {
    throw nothingLeft("at least one exposure must lie outside skip_phases", warnings, line.name);
  }
  const masked = maskObserved(open, masks);
  warnings.about(
    "observer-frame-unknown",
    "masks were widened by ±31 km/s where the observer's frame is not known",
    masked.widened,
  );
  return masked.spectra;
}

// Full width at half maximum of the instrumental profile at the line; two pixels when nobody says.
function profileWidths(
  strips: readonly NormalisedStrip[],
  options: TrailOptions & { readonly warnings: WarningList },
): number[] {
  const unknown: string[] = [];
  const widths = strips.map(({ strip }) => {
    const width = options.resolution_kms ?? profileWidth(strip.spectrum, options.line);
    if (width !== null) return width;
    unknown.push(strip.spectrum.source);
    const middle = strip.velocity_kms.findIndex((v) => v >= 0);
    return 2 * strip.pixel_kms[Math.max(0, middle)]!;
  });
  options.warnings.about(
    "resolution-unknown",
    "neither the files nor the target file give the resolution, so the instrumental profile is taken as two pixels wide",
    unknown,
  );
  return widths;
}

/**
 * Makes the trail of a line: exposures in order of time, masked, normalised and folded, on their
 * native pixels and on a uniform grid.
 *
 * Exposures are used when they cover the line; blank ones and copies are dropped, and so are those
 * whose continuum cannot be fitted or, where it is to be divided out, is not seen at 3σ: each with a
 * warning, as where some exposures of a group cover the line and others do not.
 *
 * @param spectra Exposures on barycentric vacuum wavelengths and BJD(TDB), in any order.
 * @param options Line, ephemeris and how to proceed.
 * @returns The trail.
 * @throws {InputError} When an option is out of range, no exposure covers the line (it says what is
 * covered), or none is left.
 *
 * @example
 * ```ts
 * import { makeTrail } from "@millrace/millrace/trail";
 * import type { Spectrum } from "@millrace/millrace/spectra";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const line = lineNamed("H beta");
 * const wavelength_angstrom = Float64Array.from({ length: 500 }, (_, i) => 4740 + 0.5 * i);
 * const spectra = [0, 1, 2].map((k): Spectrum => ({
 *   source: `${k}.fits`,
 *   group: 0,
 *   wavelength_angstrom,
 *   flux: wavelength_angstrom.map((w) => 10 + 20 * Math.exp(-(((w - line.vacuum_angstrom) / 10) ** 2))),
 *   error: wavelength_angstrom.map(() => 0.1),
 *   errors_given: true,
 *   mid: [2460311, 0.5 + 0.01 * k],
 *   exposure_s: 300,
 *   observer_factor: 1,
 *   resolution_angstrom: wavelength_angstrom.map(() => 1.2),
 * }));
 * const trail = makeTrail(spectra, {
 *   line,
 *   ephemeris: {
 *     period_d: 0.1,
 *     period_error_d: 0,
 *     zero: [2460311, 0.5],
 *     zero_error_d: 0,
 *     covariance_d2: 0,
 *     period_derivative: 0,
 *     zero_marks: "donor-conjunction",
 *   },
 *   reach_kms: 2500,
 *   continuum_kms: [[-6000, -3500], [5800, 7800]],
 *   noise_scale: 1,
 * });
 * assertEquals(trail.sampling.count, 3);
 * assertAlmostEquals(trail.sampling.phase[1]!, 0.1, 1e-9);
 * assertAlmostEquals(Math.max(...trail.flux), 2, 0.01);
 * ```
 */
export function makeTrail(spectra: readonly Spectrum[], options: TrailOptions): Trail {
  requireTrailOptions(options);
  const { line, ephemeris, reach_kms = 2500, step_kms, phase_bins } = options;
  const continuum_kms = options.continuum_kms ?? continuumWindows(line, { reach_kms });
  const selected = selectExposures(spectra);
  const warnings = warningsOf(line.name, selected.warnings);
  const settled = { ...options, reach_kms, continuum_kms, warnings };

  const chosen = chooseExposures(selected.spectra, settled);
  const plain = normaliseExposures(chosen, settled);
  if (plain.length === 0) {
    throw nothingLeft("at least one exposure must show a continuum", warnings, line.name);
  }
  const folded = plain.map(({ strip }) => foldExposure(strip.spectrum, ephemeris));
  const profile_kms = profileWidths(plain, settled);
  const orbits = folded.map((f) => f.cycle + f.phase);
  const strips = options.cosmic_rays === false ? plain : maskCosmicRays(plain, {
    orbits,
    profile_kms,
    // Gas in orbit shows in the line at up to the reach; a compact feature that moves by more than
    // half of it would leave the line.
    largest_speed_kms: reach_kms / 2,
    warnings,
  });
  const { noise, warnings: noisy } = groupNoise(strips, options.noise_scale ?? "measured");
  for (const { code, text } of noisy) warnings.about(code, text);
  const scales = strips.map(({ strip }) =>
    noise.groups.find((g) => g.group === strip.spectrum.group)!.applied_scale
  );
  const native = nativeSamples(strips, {
    reach_kms,
    folded,
    scales,
    profile_sigma_kms: profile_kms.map((width) => width / FWHM_OVER_SIGMA),
  });
  return {
    line,
    ...native,
    grid: makeGrid(native.sampling, native, {
      reach_kms,
      ...(step_kms === undefined ? {} : { step_kms }),
      ...(phase_bins === undefined ? {} : { phase_bins }),
    }),
    sources: strips.map(({ strip }) => strip.spectrum.source),
    group: Uint16Array.from(strips, ({ strip }) => strip.spectrum.group),
    continuum: Float64Array.from(strips, ({ continuum }) => continuum.at_line),
    continuum_error: Float64Array.from(
      strips,
      ({ continuum }) => continuum.at_line_error / Math.abs(continuum.at_line),
    ),
    noise_scale: Math.sqrt(scales.reduce((sum, s) => sum + s * s, 0) / scales.length),
    noise,
    warnings: warnings.said,
  };
}
