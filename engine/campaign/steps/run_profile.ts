import { type EcsvTable, formatEcsv } from "../../files/mod.ts";
import { randomStream } from "../../numerics/mod.ts";
import {
  type IdentifiedLine,
  identifyLines,
  meanSpectrum,
  type MeasuredRow,
  measureTrail,
  type Trail,
  type TrailMeasurements,
} from "../../trail/mod.ts";
import type { Spectrum } from "../../spectra/mod.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { pause } from "../pause.ts";
import type { Session } from "../session.ts";
import { VERSION } from "../version.ts";
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
 * continuum of the mean, of phase bins (`profile.json`) and of every exposure (`profile.ecsv`).
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
  const measured: { trail: Trail; found: TrailMeasurements }[] = [];
  for (const [index, line] of settings.entries()) {
    const trail = await session.trail(line);
    progress?.(index, settings.length, "profiles of lines");
    await pause(signal);
    const random = randomStream(target.settings.seed, FIRST_STREAM + index);
    measured.push({ trail, found: measureTrail(trail, { random }) });
  }
  const warnings = uniqueWarnings([...reading, ...measured.flatMap(({ trail }) => trail.warnings)]);
  const document: ProfileDocument = {
    ...outputHead(target, { schema: "profile/1", inputs, warnings }),
    groups: identifications(spectra, measured.map(({ found }) => found)),
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
    ["profile.ecsv", formatEcsv(exposureTable(measured, target.title))],
  ], output);
  return { document, files, warnings };
}

function identifications(
  spectra: readonly Spectrum[],
  found: readonly TrailMeasurements[],
): ProfileDocument["groups"] {
  // The object's lines are about as wide as the widest that was measured.
  const widest = Math.max(...found.map(({ mean }) => mean.profile.full_width_kms.value || 0), 1000);
  return [...Map.groupBy(spectra, ({ group }) => group)].flatMap(([group, members]) => {
    const mean = meanSpectrum(members);
    if (mean === null) return [];
    const identified = identifyLines(mean, { half_width_kms: 0.5 * widest });
    return [{ group, exposures: mean.exposures, identified }];
  });
}

function exposureTable(
  measured: readonly { trail: Trail; found: TrailMeasurements }[],
  title: string,
): EcsvTable {
  const rows = measured.flatMap(({ trail, found }) =>
    found.exposures.map((row, i) => ({ row, line: trail.line.name, source: trail.sources[i]! }))
  );
  const known = (value: number) => (Number.isFinite(value) ? value : null);
  const pair = (
    name: string,
    unit: string | undefined,
    pick: (row: MeasuredRow) => { readonly value: number; readonly error: number },
  ) => [
    {
      name,
      datatype: "float64" as const,
      unit,
      values: rows.map(({ row }) => known(pick(row).value)),
    },
    {
      name: `${name}_error`,
      datatype: "float64" as const,
      unit,
      values: rows.map(({ row }) => known(pick(row).error)),
    },
  ];
  return {
    meta: { creator: "Millrace", version: VERSION, schema: "profile-table/1", target: title },
    columns: [
      { name: "line", datatype: "string", values: rows.map(({ line }) => line) },
      { name: "source", datatype: "string", values: rows.map(({ source }) => source) },
      {
        name: "phase",
        datatype: "float64",
        description: "orbital phase at mid-exposure, cycles",
        values: rows.map(({ row }) => row.phase),
      },
      ...pair("equivalent_width", "Angstrom", (row) => row.equivalent_width_angstrom),
      ...pair("line_flux", undefined, (row) => row.line_flux),
      ...pair("continuum", undefined, (row) => row.continuum),
      ...pair("centroid", "km / s", (row) => row.profile.centroid_kms),
      ...pair("fwhm", "km / s", (row) => row.profile.fwhm_kms),
      ...pair("full_width", "km / s", (row) => row.profile.full_width_kms),
      ...pair("peak_separation", "km / s", (row) => row.profile.peak_separation_kms),
      ...pair("violet_over_red", undefined, (row) => row.profile.blue_over_red),
    ],
  };
}
