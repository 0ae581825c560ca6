import type { Ephemeris } from "../binary/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { makeTrail, type Photometry, type Trail } from "../trail/mod.ts";
import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { lineOf } from "./line_of.ts";
import { observedMasks } from "./observed_masks.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { Target } from "./target.ts";

/**
 * The trail of one `[[lines]]` table.
 *
 * @param spectra All exposures.
 * @param options What and how.
 * @param options.target The target.
 * @param options.line The table.
 * @param options.ephemeris The ephemeris.
 * @param options.photometry Light curves that scale the exposures, one a group. @default none
 * @returns The trail.
 * @throws {InputError} When nothing covers the line.
 */
export function trailOf(
  spectra: readonly Spectrum[],
  options: {
    target: Target;
    line: LineSettings;
    ephemeris: Ephemeris;
    photometry?: readonly (Photometry | null)[];
  },
): Trail {
  const { target, line: settings, ephemeris, photometry = [] } = options;
  const { trail } = target.settings;
  const line = lineOf(settings, { target });
  return makeTrail(spectra, {
    line,
    ephemeris,
    reach_kms: settings.reach_kms,
    continuum_kms: settings.continuum_kms,
    continuum: trail.continuum,
    continuum_order: trail.continuum_order,
    skip_phases: trail.skip_phases,
    phase_bins: trail.phase_bins,
    cosmic_rays: trail.cosmic_rays,
    masks: observedMasks(trail, { spectra }),
    noise_scale: trail.noise_scale,
    photometry,
    resolution_kms: lineResolution(settings, line.vacuum_angstrom),
  });
}

/** Full width at half maximum that the line's own table states, km/s. */
function lineResolution(settings: LineSettings, rest_angstrom: number): number | undefined {
  const c = SPEED_OF_LIGHT_KMS.value;
  if (settings.resolution_kms !== undefined) return settings.resolution_kms;
  if (settings.resolution_angstrom !== undefined) {
    return (c * settings.resolution_angstrom) / rest_angstrom;
  }
  return settings.resolving_power === undefined ? undefined : c / settings.resolving_power;
}
