import type { Warning } from "../../errors.ts";
import { airToVacuum, type SpectralLine } from "../../sky/mod.ts";
import type { Spectrum } from "../../spectra/mod.ts";
import {
  continuumWindows,
  lineVelocity,
  type Trail,
  type WindowContent,
  windowContents,
} from "../../trail/mod.ts";
import { keptLists, observedMasks, widestResolution } from "../observed_masks.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Target } from "../target.ts";

/** Something in the windows of a line, and whether the mean spectrum shows it. */
export interface CheckedContent extends WindowContent {
  /** Whether a line of the object stands out of the mean spectrum; null for what stands still. */
  readonly seen: boolean | null;
}

/** What {@linkcode checkedContents} needs beside the trail. */
export interface CheckContentsOptions {
  /** The target. */
  readonly target: Target;
  /** The line's table. */
  readonly line: LineSettings;
  /** All exposures. */
  readonly spectra: readonly Spectrum[];
  /** Half width of the object's lines, km/s. */
  readonly half_width_kms: number;
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** Lines that the mean spectra show. */
  readonly seen: readonly SpectralLine[];
}

/**
 * What falls into the windows of a line beside what is mapped with it: other lines of the object, and
 * what stands still in the observer's frame and is not masked.
 *
 * @param trail The line's trail.
 * @param options The rest.
 * @returns What falls into each window.
 */
export function checkedContents(trail: Trail, options: CheckContentsOptions): CheckedContent[] {
  const { target, line, spectra, half_width_kms, systemic_kms, seen } = options;
  const { reach_kms } = line;
  const masked = observedMasks(target.settings.trail, { spectra });
  const groups = new Set(trail.group);
  const own = spectra.filter(({ group }) => groups.has(group));
  const found = windowContents(trail.line, {
    reach_kms,
    continuum_kms: line.continuum_kms ?? continuumWindows(trail.line, { reach_kms }),
    half_width_kms,
    // What is masked already cannot disturb.
    observed: keptLists({ resolution_angstrom: widestResolution(own) }).filter((entry) =>
      !masked.some((mask) =>
        mask.low_angstrom <= entry.low_angstrom && mask.high_angstrom >= entry.high_angstrom
      )
    ),
    observer_factor: own.find(({ observer_factor }) => observer_factor !== null)
      ?.observer_factor ?? 1,
    systemic_kms,
  });
  const mapped = mappedWith(line, { rest: trail.line });
  return found
    .filter(({ kind, velocity_kms }) =>
      kind === "static" || mapped.every((place) => Math.abs(place - velocity_kms) > 60)
    )
    .map((content) => ({
      ...content,
      seen: content.kind === "static" ? null : seen.some(({ name }) => name === content.name),
    }));
}

// Velocities of a multiplet's components and of the blends that the target file names.
function mappedWith(line: LineSettings, options: { rest: SpectralLine }): number[] {
  const { components_air_angstrom = [], blends } = line;
  return [
    ...components_air_angstrom.map(airToVacuum),
    ...blends.flatMap(({ air_angstrom, vacuum_angstrom }) =>
      vacuum_angstrom ?? (air_angstrom === undefined ? [] : airToVacuum(air_angstrom))
    ),
  ].map((wavelength) => lineVelocity(wavelength, options.rest));
}

/**
 * Warnings about the contents of a line's windows.
 *
 * @param trail The line's trail.
 * @param contents The contents.
 * @returns About lines that are seen, and about what stands still in the line's own window.
 */
export function contentWarnings(
  trail: Trail,
  contents: readonly CheckedContent[],
): Warning[] {
  const line = trail.line.name;
  const lines = contents.filter(({ seen }) => seen === true);
  const still = contents.filter(({ kind, window }) => kind === "static" && window === "line");
  const [from, to] = [
    Math.min(...trail.sampling.velocity_kms),
    Math.max(...trail.sampling.velocity_kms),
  ];
  const fills = ({ range_kms: [low, high] }: WindowContent) => high - low > 0.5 * (to - from);
  const [narrow, broad] = [still.filter((one) => !fills(one)), still.filter(fills)];
  const list = (texts: readonly string[]) => [...new Set(texts)].join(", ");
  return [
    ...(lines.length === 0 ? [] : [{
      code: "window-shared",
      line,
      text: `other lines of the spectrum, as wide as this one, reach into its windows: ${
        list(
          lines.map((one) => `${one.name} at ${signed(one.velocity_kms)} (${one.window} window)`),
        )
      }; narrow lines.reach_kms, move lines.continuum_kms, or name a blend`,
    }]),
    ...(narrow.length === 0 ? [] : [{
      code: "static-feature",
      line,
      text:
        `sky, air or interstellar gas stand still in the line's window, and what stands still at V draws a ring of radius |V − γ| on a map: ${
          list(narrow.map(ringText))
        }; mask them with trail.mask`,
    }]),
    ...(broad.length === 0 ? [] : [{
      code: "static-band",
      line,
      text:
        `absorption of the air fills much of the line's window, and each of its features draws a ring of radius |V − γ| on a map: ${
          list(broad.map(ringText))
        }; divide it out with a standard star before, as a mask would leave too little of the line`,
    }]),
  ];
}

/** Components of a multiplet lie within this of its middle, km/s. */
const SAME_LINE_KMS = 400;

/**
 * Warns of a line that the mean spectrum does not show.
 *
 * @param trail The line's trail.
 * @param seen Lines that the mean spectra show.
 * @returns The warning; none when the line, or a component of it, is seen.
 */
export function unseenWarnings(trail: Trail, seen: readonly SpectralLine[]): Warning[] {
  const { line } = trail;
  const shown = seen.some(({ vacuum_angstrom }) =>
    Math.abs(lineVelocity(vacuum_angstrom, line)) < SAME_LINE_KMS
  );
  return shown ? [] : [{
    code: "line-not-seen",
    line: line.name,
    text:
      "the line does not stand out of the mean spectrum by 5 sigma: what is measured of it may be noise, or the wing of another",
  }];
}

function ringText({ name, velocity_kms, range_kms, ring_radius_kms }: WindowContent): string {
  return ring_radius_kms === null
    ? `${name} from ${signed(range_kms[0])} to ${signed(range_kms[1])}`
    : `${name} at ${signed(velocity_kms)} (ring of ${ring_radius_kms.toFixed(0)} km/s)`;
}

function signed(kms: number): string {
  const rounded = Math.round(kms);
  return `${rounded > 0 ? "+" : rounded < 0 ? "−" : ""}${Math.abs(rounded)} km/s`;
}
