import {
  airToVacuum,
  interstellarWindows,
  nightSkyWindows,
  type ObservedWindow,
  telluricBands,
} from "../sky/mod.ts";
import { median } from "../numerics/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import type { ObservedMask } from "../trail/mod.ts";
import type { TrailSettings } from "./schema/trail_section.ts";

/** Width of a night-sky line where the resolution is not known, Å. */
const USUAL_RESOLUTION = 2;

/**
 * The coarsest resolution among exposures: night-sky lines are at most as wide.
 *
 * @param spectra The exposures.
 * @returns Full width at half maximum, Å; 2 where no exposure says.
 */
export function widestResolution(spectra: readonly Spectrum[]): number {
  const widths = spectra.flatMap(({ resolution_angstrom }) =>
    resolution_angstrom === null ? [] : [median(resolution_angstrom)]
  );
  return widths.length === 0 ? USUAL_RESOLUTION : Math.max(...widths);
}

/** A window of the kept lists as a mask. */
function maskOf({ name, low_angstrom, high_angstrom }: ObservedWindow): ObservedMask {
  return { name, low_angstrom, high_angstrom };
}

const lists = (resolution: number) => ({
  sky: () => nightSkyWindows(resolution),
  // The weak bands are as wide as a line and a few per cent deep: to mask one would cost the line.
  telluric: () => telluricBands.filter(({ name }) => !name.includes("weak")),
  interstellar: () => interstellarWindows,
});

/**
 * Everything that the kept lists know in the observer's frame.
 *
 * @param options The instrument.
 * @param options.resolution_angstrom Full width at half maximum, Å. @default 2
 * @returns Masks on vacuum wavelengths.
 */
export function keptLists(options: { resolution_angstrom?: number } = {}): ObservedMask[] {
  const { resolution_angstrom = USUAL_RESOLUTION } = options;
  return Object.values(lists(resolution_angstrom)).flatMap((list) => list().map(maskOf));
}

/**
 * The masks that `[trail]` asks for.
 *
 * @param settings `[trail]`.
 * @param options What is masked.
 * @param options.spectra The exposures: night-sky lines are as wide as their resolution. @default none
 * @returns Masks on vacuum wavelengths in the observer's frame.
 */
export function observedMasks(
  settings: TrailSettings,
  options: { spectra?: readonly Spectrum[] } = {},
): ObservedMask[] {
  const named = lists(widestResolution(options.spectra ?? []));
  return [
    ...settings.mask.flatMap((name) => named[name]().map(maskOf)),
    ...settings.mask_observed_angstrom.map(([low, high]) => ({
      name: `${low} to ${high} Å`,
      low_angstrom: airToVacuum(low),
      high_angstrom: airToVacuum(high),
    })),
  ];
}
