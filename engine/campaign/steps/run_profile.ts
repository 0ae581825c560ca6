import { formatEcsv } from "../../files/mod.ts";
import { randomStream } from "../../numerics/mod.ts";
import { type IdentifiedLine, type MeasuredRow, measureTrail } from "../../trail/mod.ts";
import { identifiedGroups } from "../identified_groups.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { pause } from "../pause.ts";
import type { Session } from "../session.ts";
import { type MeasuredLine, profilePlate } from "./profile_plate.ts";
import { profileTable } from "./profile_table.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** Streams of chance of `profile` begin here, so that they are not those of other steps. */
const FIRST_STREAM = 500_000;

/** `profile.json`. */
export interface ProfileDocument extends OutputHead {
  /** Lines looked for in the mean spectrum of each group of exposures. */
  readonly groups: readonly {
    /** Index of the `[[exposures]]` group, from 0. */
    readonly group: number;
    /** Exposures averaged. */
    readonly exposures: number;
    /** Lines of the list that the spectra cover. */
    readonly identified: readonly IdentifiedLine[];
  }[];
  /** One entry a line. */
  readonly lines: readonly LineProfile[];
}

/** What was measured on one line. */
export interface LineProfile {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Whether the profiles were turned round, as the line is net in absorption. */
  readonly turned: boolean;
  /** Smoothing before peaks were sought, full width at half maximum, km/s. */
  readonly smooth_kms: number;
  /** Measured on the mean of all exposures. */
  readonly mean: MeasuredRow;
  /** Measured on phase bins. */
  readonly bins: readonly MeasuredRow[];
}

/**
 * Measures the lines: mean spectrum with identifications; equivalent width, flux, widths, peaks and
 * continuum of the mean, of phase bins (`profile.json`) and of every exposure (`profile.ecsv`); and
 * draws them (`profile-plate`).
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 */
export async function runProfile(
  session: Session,
  output: StepOutput,
): Promise<StepResult<ProfileDocument>> {
  const { target, signal, progress } = session;
  const { spectra, inputs, warnings: reading } = await session.exposures();
  const settings = session.lines("measure the profiles");
  const measured: MeasuredLine[] = [];
  for (const [index, line] of settings.entries()) {
    const trail = await session.trail(line);
    progress?.(index, settings.length, "profiles of lines");
    await pause(signal);
    const random = randomStream(target.settings.seed, FIRST_STREAM + index);
    measured.push({
      trail,
      found: measureTrail(trail, { random }),
      peaks: line.traces === "accretor" && line.components_air_angstrom === undefined,
    });
  }
  const groups = identifiedGroups(
    spectra,
    measured.map(({ trail, found }) => ({
      trail,
      full_width_kms: found.mean.profile.full_width_kms.value,
    })),
  );
  const warnings = uniqueWarnings([...reading, ...measured.flatMap(({ trail }) => trail.warnings)]);
  const document: ProfileDocument = {
    ...outputHead(target, { schema: "profile/1", inputs, warnings }),
    groups: groups.map(({ group, mean, identified }) => ({
      group,
      exposures: mean.exposures,
      identified,
    })),
    lines: measured.map(({ trail, found }) => ({
      line: trail.line.name,
      rest_air_angstrom: trail.line.air_angstrom,
      turned: found.turned,
      smooth_kms: found.smooth_kms,
      mean: found.mean,
      bins: found.bins,
    })),
  };
  const files = await writeStep([
    ["profile.json", jsonText(document)],
    ["profile.ecsv", formatEcsv(profileTable(measured, { title: target.title }))],
    ...await profilePlate(session, { groups, measured }),
  ], output);
  return { document, files, warnings };
}
