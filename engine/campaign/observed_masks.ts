import {
  airToVacuum,
  interstellarWindows,
  nightSkyWindows,
  type ObservedWindow,
  telluricBands,
} from "../sky/mod.ts";
import type { ObservedMask } from "../trail/mod.ts";
import type { TrailSettings } from "./schema/trail_section.ts";

/** Width of a night-sky line where the resolution is not known, Å. */
const USUAL_RESOLUTION = 2;

/** A window of the kept lists as a mask. */
function maskOf({ name, low_angstrom, high_angstrom }: ObservedWindow): ObservedMask {
  return { name, low_angstrom, high_angstrom };
}

const lists = (resolution: number) => ({
  sky: () => nightSkyWindows(resolution),
  telluric: () => telluricBands,
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
 * @param options The instrument.
 * @param options.resolution_angstrom Full width at half maximum, Å. @default 2
 * @returns Masks on vacuum wavelengths in the observer's frame.
 */
export function observedMasks(
  settings: TrailSettings,
  options: { resolution_angstrom?: number } = {},
): ObservedMask[] {
  const { resolution_angstrom = USUAL_RESOLUTION } = options;
  const named = lists(resolution_angstrom);
  return [
    ...settings.mask.flatMap((name) => named[name]().map(maskOf)),
    ...settings.mask_observed_angstrom.map(([low, high]) => ({
      name: `${low} to ${high} Å`,
      low_angstrom: airToVacuum(low),
      high_angstrom: airToVacuum(high),
    })),
  ];
}
