import { formatEcsv } from "../../files/mod.ts";
import type { Decision } from "../../spectra/mod.ts";
import { describeTrail, type JournalEntry, journalOf, widthInAngstrom } from "../../trail/mod.ts";
import { InputError, type Warning } from "../../errors.ts";
import { identifiedGroups } from "../identified_groups.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { mappedLines } from "../line_of.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { type LineTests, testsSummary } from "../test_line.ts";
import { checkedContents, contentWarnings, unseenWarnings } from "./check_contents.ts";
import { checkEphemeris, type EphemerisCheck } from "./check_ephemeris.ts";
import { checkZeros, type ZeroCheck } from "./check_zeros.ts";
import type { LineCheck } from "./line_check.ts";
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
  /** The ephemeris as understood. */
  readonly ephemeris: EphemerisCheck;
  /** The zero of wavelengths of each group in which anything shows it. */
  readonly zeros: readonly ZeroCheck[];
  /** The journal of observations. */
  readonly journal: readonly JournalEntry[];
  /** One entry a line. */
  readonly lines: readonly LineCheck[];
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
  const epoch = spectra[0]!.mid;
  const known = checkEphemeris(target, { ephemeris, epoch });
  const warnings: Warning[] = [
    ...reading,
    ...known.warnings,
    ...found.warnings,
    ...systemic.warnings,
  ];
  const lines: LineCheck[] = [];
  const described = [];
  for (const line of session.lines("check the exposures")) {
    const trail = await session.trail(line);
    const description = describeTrail(trail, {
      ephemeris,
      epoch,
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
  // Other lines of the gas are as wide as its widest.
  const widest = Math.max(
    ...described.map(({ line, description: { measures, velocity_kms } }) =>
      line.traces === "accretor" ? measures.full_width_kms / 2 || velocity_kms : 0
    ),
  );
  const mapped = mappedLines(described.map(({ line }) => line));
  for (const { line, trail, description } of described) {
    const own = description.measures.full_width_kms / 2 || description.velocity_kms;
    const contents = checkedContents(trail, {
      target,
      line,
      spectra,
      half_width_kms: line.traces === "accretor" ? widest : own,
      systemic_kms: systemic.kms,
      seen,
    });
    warnings.push(
      ...trail.warnings,
      ...description.warnings,
      ...unseenWarnings(trail, seen),
      ...contentWarnings(trail, contents),
    );
    const {
      mean: _mean,
      warnings: _warnings,
      rest_vacuum_angstrom: _rest,
      pixel_kms: _pixel,
      phase_error_kms,
      ...rest
    } = description;
    const { phase_error } = known.check;
    const tests = mapped.includes(line) ? await testsOrReason(session, line) : null;
    warnings.push(...(tests?.warnings ?? []));
    lines.push({
      ...rest,
      phase_error,
      phase_error_kms: phase_error === null ? null : phase_error_kms,
      traces: line.traces,
      equivalent_width_angstrom: (description.net === "absorption" ? -1 : 1) *
        widthInAngstrom(description.measures.equivalent_width_kms, trail.line.vacuum_angstrom),
      noise_scale: trail.noise_scale,
      noise: trail.noise,
      any_map: tests === null || tests.found === null ? null : testsSummary(tests.found),
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
    ephemeris: known.check,
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

/** The tests of a line; the reason among the warnings where it cannot be mapped at all. */
async function testsOrReason(
  session: Session,
  line: LineSettings,
): Promise<{ readonly found: LineTests | null; readonly warnings: readonly Warning[] }> {
  try {
    const found = await session.anyMap(line);
    return { found, warnings: found.warnings };
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    const text = `no map could be made: ${error.message}`;
    return { found: null, warnings: [{ code: "cannot-be-mapped", line: line.name, text }] };
  }
}
