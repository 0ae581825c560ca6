import { formatEcsv } from "../../files/mod.ts";
import type { Decision } from "../../spectra/mod.ts";
import {
  describeTrail,
  type JournalEntry,
  journalOf,
  type PairNoise,
  type PhaseCoverage,
  type ProfileMeasures,
  type Spread,
  type TrailNoise,
  widthInAngstrom,
} from "../../trail/mod.ts";
import type { Warning } from "../../errors.ts";
import { identifiedGroups } from "../identified_groups.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import type { Session } from "../session.ts";
import { type CheckedContent, checkedContents, contentWarnings } from "./check_contents.ts";
import { checkZeros, type ZeroCheck } from "./check_zeros.ts";
import { journalTable } from "./journal_table.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** `check.json`. */
export interface CheckDocument extends OutputHead {
  /** Exposures read. */
  readonly exposures: number;
  /** Files read. */
  readonly files: number;
  /** What each "auto" decided, and from which key. */
  readonly decisions: readonly Decision[];
  /** The zero of wavelengths of each group in which anything shows it. */
  readonly zeros: readonly ZeroCheck[];
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
  /** Steps of half an orbit in which such a feature moves by one resolution element. */
  readonly directions_needed: number;
  /** How many of them hold the middle of an exposure, all orbits folded. */
  readonly directions_observed: number;
  /** Standard deviation of the phase, cycles. */
  readonly phase_error: number;
  /** How far that moves a feature of that velocity, km/s. */
  readonly phase_error_kms: number;
  /** What is measured on the mean profile. */
  readonly measures: ProfileMeasures;
  /** Star with which the line moves. */
  readonly traces: "accretor" | "donor";
  /** Equivalent width of the mean profile, Å, emission positive. */
  readonly equivalent_width_angstrom: number;
  /** Whether the line is in emission or absorption. */
  readonly net: string;
  /** Variation of the continuum: standard deviation over mean. */
  readonly continuum_variation: number;
  /** Part of it that goes with the orbit: semi-amplitude over mean. */
  readonly continuum_orbital_amplitude: number;
  /** Factor applied to the errors. */
  readonly noise_scale: number;
  /** What was measured of the noise. */
  readonly noise: TrailNoise;
  /** Noise within the line from repeats and mirrored pairs. */
  readonly pairs: { readonly repeat: PairNoise | null; readonly mirror: PairNoise | null };
  /** What else falls into the windows. */
  readonly contents: readonly CheckedContent[];
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
  const read = await session.exposures();
  const { spectra, decisions, inputs, warnings: reading } = read;
  const ephemeris = await session.ephemeris();
  const systemic = await session.systemic();
  const binary = session.binary();
  const found = checkZeros(spectra, {
    target,
    zeros: read.zeros,
    ephemeris,
    k_accretor_kms: binary?.k_accretor_kms ?? null,
  });
  const warnings: Warning[] = [...reading, ...found.warnings, ...systemic.warnings];
  const lines: LineCheck[] = [];
  const described = [];
  for (const line of session.lines("check the exposures")) {
    const trail = await session.trail(line);
    const description = describeTrail(trail, {
      ephemeris,
      epoch: spectra[0]!.mid,
      systemic_kms: systemic.kms,
      // What moves with the donor has its speed, however wide the line is.
      ...(line.traces === "donor" && binary !== null ? { velocity_kms: binary.k_donor_kms } : {}),
    });
    described.push({ line, trail, description });
  }
  const seen = identifiedGroups(
    spectra,
    described.map(({ trail, description }) => ({
      trail,
      full_width_kms: description.measures.full_width_kms,
    })),
  ).flatMap(({ identified }) => identified.filter((one) => one.seen).map(({ line }) => line));
  for (const { line, trail, description } of described) {
    const contents = checkedContents(trail, {
      target,
      line,
      spectra,
      half_width_kms: description.measures.full_width_kms / 2 || description.velocity_kms,
      systemic_kms: systemic.kms,
      seen,
    });
    warnings.push(...trail.warnings, ...description.warnings, ...contentWarnings(trail, contents));
    const {
      mean: _mean,
      warnings: _warnings,
      rest_vacuum_angstrom: _rest,
      pixel_kms: _pixel,
      ...rest
    } = description;
    lines.push({
      ...rest,
      traces: line.traces,
      equivalent_width_angstrom: (description.net === "absorption" ? -1 : 1) *
        widthInAngstrom(description.measures.equivalent_width_kms, trail.line.vacuum_angstrom),
      noise_scale: trail.noise_scale,
      noise: trail.noise,
      contents,
    });
  }
  const all = uniqueWarnings(warnings);
  const journal = journalOf(spectra, { ephemeris });
  const document: CheckDocument = {
    ...outputHead(target, { schema: "check/1", inputs, warnings: all }),
    exposures: spectra.length,
    files: inputs.length,
    decisions,
    zeros: found.zeros,
    journal,
    lines,
  };
  const files = await writeStep([
    ["check.json", jsonText(document)],
    ["journal.ecsv", formatEcsv(journalTable(journal, { title: target.title }))],
  ], output);
  return { document, files, warnings: all };
}
