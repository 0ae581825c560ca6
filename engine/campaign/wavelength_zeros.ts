import { InputError, type Warning } from "../errors.ts";
import { airToVacuum, nightSkyLines, telluricBands } from "../sky/mod.ts";
import type { Decision, Spectrum } from "../spectra/mod.ts";
import {
  correctZero,
  lineWavelength,
  listed,
  measureSkyLines,
  measureTelluric,
  parseShifts,
  type ZeroShift,
} from "../trail/mod.ts";
import { lineOf } from "./line_of.ts";
import type { InputDigest } from "./output_head.ts";
import { readSideFile } from "./side_file.ts";
import type { Target } from "./target.ts";

/** How the zero of wavelengths of one group of exposures was found. */
export interface GroupZero {
  /** Index of the `[[exposures]]` group. */
  readonly group: number;
  /** From what the shifts are: "night-sky lines", "telluric absorption", or the name of a table. */
  readonly from: string;
  /** Features they are from, as in "[O I] 5577"; empty for a table. */
  readonly features: readonly string[];
  /** Whether the wavelengths were corrected by them. */
  readonly corrected: boolean;
  /** One shift an exposure of the group: how far its wavelengths were too long. */
  readonly shifts: readonly ZeroShift[];
}

/** A group of exposures after the correction that the target file asks for. */
export interface ZeroedGroup {
  /** Its exposures. */
  readonly spectra: readonly Spectrum[];
  /** What was done; null when nothing was asked for. */
  readonly zero: GroupZero | null;
  /** The same for the list of decisions. */
  readonly decisions: readonly Decision[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
  /** Files read. */
  readonly inputs: readonly InputDigest[];
}

type Range = readonly [low: number, high: number];

// Where the target's own lines are: what moves there is no sky.
function ownRanges(target: Target): Range[] {
  return target.settings.lines.map((settings) => {
    const line = lineOf(settings, { target });
    const { reach_kms, components_air_angstrom = [line.air_angstrom] } = settings;
    const places = components_air_angstrom.map((air) => airToVacuum(air) / line.vacuum_angstrom);
    return [
      lineWavelength(-reach_kms, line) * Math.min(...places),
      lineWavelength(reach_kms, line) * Math.max(...places),
    ];
  });
}

// What all exposures cover, in the observer's frame.
function covered(spectra: readonly Spectrum[]): Range {
  const ends = spectra.flatMap(({ wavelength_angstrom: w, observer_factor }) =>
    observer_factor === null ? [] : [[w[0]! / observer_factor, w.at(-1)! / observer_factor]]
  );
  return [Math.max(...ends.map(([low]) => low!)), Math.min(...ends.map(([, high]) => high!))];
}

/**
 * Measures the zeros of wavelength of a group of exposures from what stands still in the observer's
 * frame, away from the target's own lines. Nothing is corrected.
 *
 * @param spectra The group's exposures.
 * @param options From what.
 * @param options.target The target, for its lines.
 * @param options.by "sky-lines": night-sky emission lines; "telluric": absorption of the air, which
 * gives shifts relative to the mean of all.
 * @returns The shifts, NaN where nothing was measured, and the features they are from; where none is
 * seen, those that stand in the range.
 */
export function measureZeros(
  spectra: readonly Spectrum[],
  options: { target: Target; by: "sky-lines" | "telluric" },
): Pick<GroupZero, "from" | "features" | "shifts"> {
  const { target, by } = options;
  const [low, high] = covered(spectra);
  const own = ownRanges(target);
  const free = ([from, to]: Range) =>
    from > low && to < high && own.every(([a, b]) => to < a || from > b);
  if (by === "sky-lines") {
    const inRange = nightSkyLines.filter(({ isolated, vacuum_angstrom: w }) =>
      isolated && free([w * 0.999, w * 1.001])
    );
    // A line that most exposures do not show is not there: what some show in its place is something else.
    const shown = inRange.filter(({ vacuum_angstrom }) =>
      2 * known(measureSkyLines(spectra, { lines_angstrom: [vacuum_angstrom] })).length >
        spectra.length
    );
    return {
      from: "night-sky lines",
      features: (shown.length > 0 ? shown : inRange).map(({ name }) => name),
      shifts: measureSkyLines(spectra, {
        lines_angstrom: shown.map(({ vacuum_angstrom }) => vacuum_angstrom),
      }),
    };
  }
  const bands = telluricBands.filter(({ name, low_angstrom, high_angstrom }) =>
    !name.includes("weak") && free([low_angstrom, high_angstrom])
  );
  return {
    from: "telluric absorption",
    features: bands.map(({ name }) => name),
    shifts: bands.length === 0
      ? spectra.map(({ source }) => ({ source, shift_kms: NaN, error_kms: NaN, features: 0 }))
      : measureTelluric(spectra, {
        ranges_angstrom: bands.map((band) => [band.low_angstrom, band.high_angstrom] as const),
      }),
  };
}

const known = (shifts: readonly ZeroShift[]) =>
  shifts.filter(({ shift_kms }) => Number.isFinite(shift_kms));

async function askedShifts(
  spectra: readonly Spectrum[],
  options: { target: Target; group: number },
): Promise<Pick<GroupZero, "from" | "features" | "shifts"> & { inputs: InputDigest[] }> {
  const { target, group } = options;
  const how = target.settings.exposures[group]!.wavelength_zero_kms;
  const key = `exposures[${group}].wavelength_zero_kms`;
  const place = { file: target.file, line: target.places.get(key)?.line, key };
  if (how !== "sky-lines" && how !== "telluric") {
    const file = await readSideFile(target, {
      key,
      value: how,
      action: "read wavelength shifts",
      remedy:
        'it may be "none", "sky-lines", "telluric", or a CSV file with columns file and shift_kms',
    });
    const shifts = parseShifts(file.text, {
      sources: spectra.map(({ source }) => source),
      file: file.path,
    });
    return { from: how, features: [], shifts, inputs: [file.input] };
  }
  if (spectra.every(({ observer_factor }) => observer_factor === null)) {
    throw new InputError({
      action: "measure the zero of wavelengths",
      rule: "the observer's frame must be known: headers or [sky] must say where the target is",
      value: how,
      ...place,
    });
  }
  const measured = measureZeros(spectra, { target, by: how });
  if (known(measured.shifts).length > 0) return { ...measured, inputs: [] };
  const { features } = measured;
  const what = how === "sky-lines" ? "an isolated night-sky line" : "a telluric band";
  throw new InputError({
    action: "measure the zero of wavelengths",
    rule: features.length === 0
      ? `the spectra must cover ${what} away from the lines of the target`
      : `most exposures must show ${what}, and none of ${listed(features)} is seen`,
    value: how,
    ...place,
    remedy:
      'state "none", "sky-lines", "telluric", or a CSV file with columns file and shift_kms; sky lines are lost when the sky was subtracted well',
  });
}

/**
 * Corrects the wavelengths of one group of exposures as its `wavelength_zero_kms` asks, and says what
 * was done.
 *
 * @param spectra The group's exposures.
 * @param options Which.
 * @param options.target The target.
 * @param options.group Index of the group.
 * @returns The exposures and what was done.
 * @throws {InputError} When nothing can be measured, or the table of shifts is missing or wrong.
 */
export async function zeroedGroup(
  spectra: readonly Spectrum[],
  options: { target: Target; group: number },
): Promise<ZeroedGroup> {
  const { target, group } = options;
  if (target.settings.exposures[group]!.wavelength_zero_kms === "none") {
    return { spectra, zero: null, decisions: [], warnings: [], inputs: [] };
  }
  const { from, features, shifts, inputs } = await askedShifts(spectra, options);
  const moved = known(shifts);
  const value = `moved by ${range(moved.map(({ shift_kms }) => -shift_kms))} km/s`;
  const origin = features.length === 0 ? from : `${from}: ${listed(features)}`;
  const missing = shifts.filter(({ shift_kms }) => !Number.isFinite(shift_kms));
  const where = target.settings.exposures.length > 1 ? `group ${group + 1}: ` : "";
  return {
    spectra: correctZero(spectra, shifts),
    zero: { group, from, features, corrected: true, shifts },
    decisions: [{
      group,
      what: "wavelength zero",
      value,
      from: origin,
      assumed: false,
      exposures: moved.length,
      source: moved[0]!.source,
    }],
    warnings: [
      {
        code: "wavelength-zero-corrected",
        text:
          `${where}wavelengths of ${moved.length} of ${shifts.length} exposures were ${value}, from ${origin}`,
      },
      ...(missing.length === 0 ? [] : [{
        code: "wavelength-zero-missing",
        text:
          `${where}no shift of wavelength is known for these exposures, which stand as they were: ${
            listed(missing.map(({ source }) => source))
          }`,
      }]),
    ],
    inputs,
  };
}

function range(values: readonly number[]): string {
  const text = (value: number) =>
    `${value < 0 ? "−" : "+"}${Math.abs(value).toFixed(1)}`.replace(/^[−+](0\.0)$/, "$1");
  return `${text(Math.min(...values))} to ${text(Math.max(...values))}`;
}
