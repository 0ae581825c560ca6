import { type EcsvTable, formatEcsv } from "../../files/mod.ts";
import type { Decision } from "../../spectra/mod.ts";
import {
  continuumWindows,
  describeTrail,
  type JournalEntry,
  journalOf,
  type PairNoise,
  type PhaseCoverage,
  type ProfileMeasures,
  type Spread,
  type Trail,
  type TrailNoise,
  type WindowContent,
  windowContents,
} from "../../trail/mod.ts";
import type { Warning } from "../../errors.ts";
import { keptLists, observedMasks } from "../observed_masks.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { VERSION } from "../version.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** `check.json`. */
export interface CheckDocument extends OutputHead {
  /** Exposures read. */
  readonly exposures: number;
  /** Files read. */
  readonly files: number;
  /** What each "auto" decided, and from which key. */
  readonly decisions: readonly Decision[];
  /** The journal of observations. */
  readonly journal: readonly JournalEntry[];
  /** One entry a line. */
  readonly lines: readonly LineCheck[];
}

/** One line as an observer checks it before inverting. */
export interface LineCheck {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Exposures used. */
  readonly exposures: number;
  /** Time from the first to the last mid-exposure, orbits. */
  readonly span_orbits: number;
  /** Coverage of the orbit. */
  readonly coverage: PhaseCoverage;
  /** Signal to noise of the continuum per resolution element. */
  readonly signal_to_noise: Spread;
  /** Resolution element, km/s. */
  readonly resolution_kms: Spread;
  /** Velocity for which smear and exposures are told, km/s. */
  readonly velocity_kms: number;
  /** How far a feature of that velocity moves during an exposure, km/s. */
  readonly smear_kms: Spread;
  /** Exposures needed per half orbit at that velocity. */
  readonly exposures_needed_per_half_orbit: number;
  /** Exposures there are per half orbit. */
  readonly exposures_per_half_orbit: number;
  /** Standard deviation of the phase, cycles. */
  readonly phase_error: number;
  /** How far that moves a feature of that velocity, km/s. */
  readonly phase_error_kms: number;
  /** What is measured on the mean profile. */
  readonly measures: ProfileMeasures;
  /** Whether the line is in emission or absorption. */
  readonly net: string;
  /** Variation of the continuum: standard deviation over mean. */
  readonly continuum_variation: number;
  /** Factor applied to the errors. */
  readonly noise_scale: number;
  /** What was measured of the noise. */
  readonly noise: TrailNoise;
  /** Noise within the line from repeats and mirrored pairs. */
  readonly pairs: { readonly repeat: PairNoise | null; readonly mirror: PairNoise | null };
  /** What else falls into the windows. */
  readonly contents: readonly WindowContent[];
}

/**
 * Reads everything and says what it is worth: `check.json` and `journal.ecsv`.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 */
export async function runCheck(
  session: Session,
  output: StepOutput,
): Promise<StepResult<CheckDocument>> {
  const { target } = session;
  const { spectra, decisions, inputs, warnings: reading } = await session.exposures();
  const ephemeris = await session.ephemeris();
  const warnings: Warning[] = [...reading, ...(await session.systemic()).warnings];
  const lines: LineCheck[] = [];
  for (const line of session.lines("check the exposures")) {
    const trail = await session.trail(line);
    const description = describeTrail(trail, {
      ephemeris,
      epoch: spectra[0]!.mid,
      systemic_kms: (await session.systemic()).kms,
    });
    const contents = contentsOf(trail, {
      session,
      line,
      half_width_kms: description.velocity_kms,
      observer_factor: spectra[0]!.observer_factor ?? 1,
      systemic_kms: (await session.systemic()).kms,
    });
    warnings.push(...trail.warnings, ...description.warnings, ...contentWarnings(trail, contents));
    const {
      mean: _mean,
      warnings: _warnings,
      rest_vacuum_angstrom: _rest,
      pixel_kms: _pixel,
      ...rest
    } = description;
    lines.push({ ...rest, noise_scale: trail.noise_scale, noise: trail.noise, contents });
  }
  const all = uniqueWarnings(warnings);
  const journal = journalOf(spectra, { ephemeris });
  const document: CheckDocument = {
    ...outputHead(target, { schema: "check/1", inputs, warnings: all }),
    exposures: spectra.length,
    files: inputs.length,
    decisions,
    journal,
    lines,
  };
  const files = await writeStep([
    ["check.json", jsonText(document)],
    ["journal.ecsv", formatEcsv(journalTable(journal, target.title))],
  ], output);
  return { document, files, warnings: all };
}

function contentsOf(
  trail: Trail,
  options: {
    session: Session;
    line: LineSettings;
    half_width_kms: number;
    observer_factor: number;
    systemic_kms: number;
  },
): WindowContent[] {
  const { session, line, half_width_kms, observer_factor, systemic_kms } = options;
  const { reach_kms } = line;
  const { trail: settings } = session.target.settings;
  const masked = observedMasks(settings);
  return windowContents(trail.line, {
    reach_kms,
    continuum_kms: line.continuum_kms ?? continuumWindows(trail.line, { reach_kms }),
    half_width_kms,
    // What is masked already cannot disturb.
    observed: keptLists().filter((entry) =>
      !masked.some((mask) =>
        mask.low_angstrom <= entry.low_angstrom && mask.high_angstrom >= entry.high_angstrom
      )
    ),
    observer_factor,
    systemic_kms,
  });
}

function contentWarnings(trail: Trail, contents: readonly WindowContent[]): Warning[] {
  const line = trail.line.name;
  const lines = contents.filter(({ kind }) => kind === "line");
  const still = contents.filter(({ kind, window }) => kind === "static" && window === "line");
  const at = ({ name, velocity_kms }: WindowContent) =>
    `${name} at ${velocity_kms > 0 ? "+" : "−"}${Math.abs(velocity_kms).toFixed(0)} km/s`;
  return [
    ...(lines.length === 0 ? [] : [{
      code: "window-shared",
      line,
      text: `as wide as this line, others reach into its windows: ${
        [...new Set(lines.map((entry) => `${at(entry)} (${entry.window} window)`))].join(", ")
      }`,
    }]),
    ...(still.length === 0 ? [] : [{
      code: "static-feature",
      line,
      text: `features of sky or interstellar gas stand in the line's window and draw rings: ${
        still.map((entry) => `${at(entry)} (ring of ${entry.ring_radius_kms?.toFixed(0)} km/s)`)
          .join(", ")
      }; mask them with trail.mask`,
    }]),
  ];
}

function journalTable(journal: readonly JournalEntry[], title: string): EcsvTable {
  const number = (
    name: string,
    unit: string | undefined,
    value: (entry: JournalEntry) => number | null,
    description: string,
  ) => ({ name, datatype: "float64" as const, unit, description, values: journal.map(value) });
  return {
    meta: { creator: "Millrace", version: VERSION, schema: "journal/1", target: title },
    columns: [
      {
        name: "group",
        datatype: "int32",
        description: "index of the exposures group, from 1",
        values: journal.map(({ group }) => group + 1),
      },
      number("first_bjd_tdb", "d", ({ first }) => first[0] + first[1], "first mid-exposure"),
      number("last_bjd_tdb", "d", ({ last }) => last[0] + last[1], "last mid-exposure"),
      {
        name: "exposures",
        datatype: "int32",
        values: journal.map(({ exposures }) => exposures),
      },
      number("shortest_s", "s", ({ shortest_s }) => shortest_s, "shortest exposure"),
      number("longest_s", "s", ({ longest_s }) => longest_s, "longest exposure"),
      number("from_angstrom", "Angstrom", (e) => e.from_angstrom, "first wavelength, vacuum"),
      number("to_angstrom", "Angstrom", (e) => e.to_angstrom, "last wavelength, vacuum"),
      number("pixel_angstrom", "Angstrom", (e) => e.pixel_angstrom, "median pixel"),
      number(
        "resolution_angstrom",
        "Angstrom",
        (e) => e.resolution_angstrom,
        "full width at half maximum",
      ),
      number(
        "signal_to_noise_pixel",
        undefined,
        (e) => e.signal_to_noise_pixel,
        "median flux over error of a pixel",
      ),
      number("orbits", undefined, (e) => e.orbits, "span in orbits"),
      number("first_orbit", undefined, (e) => e.first_orbit, "orbits since the zero at the start"),
    ],
  };
}
