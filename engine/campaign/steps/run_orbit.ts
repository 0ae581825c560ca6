import type { Ephemeris } from "../../binary/mod.ts";
import { median, randomStream } from "../../numerics/mod.ts";
import { type EcsvTable, formatEcsv } from "../../files/mod.ts";
import {
  measureOrbit,
  type OrbitLine,
  type OrbitMeasurement,
  type OrbitReport,
  type VelocityRow,
} from "../../orbit/mod.ts";
import type { PanelName } from "../../figures/mod.ts";
import type { Warning } from "../../errors.ts";
import { airToVacuum, type SpectralLine } from "../../sky/mod.ts";
import { FWHM_OVER_SIGMA } from "../../trail/mod.ts";
import { ephemerisOf } from "../ephemeris_of.ts";
import { figureFiles } from "../figure_files.ts";
import { inclinationOf } from "../inclination_of.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { pause } from "../pause.ts";
import { readTemplates } from "../read_template.ts";
import { refinedTarget } from "../refined_target.ts";
import type { Session } from "../session.ts";
import { VERSION } from "../version.ts";
import { orbitSubject } from "../subject/orbit_subject.ts";
import { trailOf } from "../trail_of.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** Stream of chance of `orbit`, not that of any other step. */
const STREAM = 600_000;

/** `orbit.json`. */
export interface OrbitDocument extends OutputHead, OrbitReport {}

/** An orbit as measured, with what its trails had to say. */
export interface TargetOrbit extends OrbitMeasurement {
  /** The first line. */
  readonly line: SpectralLine;
  /** What a user should know of the trails. */
  readonly trail_warnings: readonly Warning[];
}

/**
 * Measures the orbit of a session's target: once, whoever asks.
 *
 * @param session The target at work.
 * @returns Report, velocities, data for plates.
 */
export async function measureTargetOrbit(session: Session): Promise<TargetOrbit> {
  const { target, signal } = session;
  const { spectra, photometry } = await session.exposures();
  const known = await knownBefore(session);
  const ephemeris = known ?? await session.ephemeris();
  const lines: OrbitLine[] = [];
  for (const settings of session.lines("measure the orbit")) {
    const trail = known === null
      ? await session.trail(settings)
      : trailOf(spectra, { target, line: settings, ephemeris, photometry });
    const resolution_kms = FWHM_OVER_SIGMA * median(trail.sampling.profile_sigma_kms);
    const templates = await readTemplates(target, { settings, line: trail.line, resolution_kms });
    lines.push({
      trail,
      traces: settings.traces,
      ...(templates.length === 0 ? {} : { templates }),
      ...(settings.components_air_angstrom === undefined ? {} : {
        components_vacuum_angstrom: settings.components_air_angstrom.map(airToVacuum),
      }),
    });
    await pause(signal);
  }
  const measurement = measureOrbit(lines, {
    ephemeris,
    random: randomStream(target.settings.seed, STREAM),
    period_range_d: (target.settings.orbit.before ?? target.settings.orbit).period_range_d,
    inclination: inclinationOf(target),
    disc_shadow_deg: target.settings.binary.disc_shadow_deg ?? null,
    superhump_excess: superhump(session),
  });
  const [{ trail }] = lines as [OrbitLine];
  return {
    ...measurement,
    line: trail.line,
    trail_warnings: lines.flatMap((line) => line.trail.warnings),
  };
}

/**
 * The ephemeris to start from where it is not that of `[orbit]`: what was known before it was
 * measured from exposures, or, where only a range of periods is known, an ephemeris by which the
 * trails tell time: the middle of the range, from the zero that is given or the first exposure.
 */
async function knownBefore(session: Session): Promise<Ephemeris | null> {
  const { target } = session;
  const { before } = target.settings.orbit;
  const orbit = before ?? target.settings.orbit;
  const { spectra, direction } = await session.exposures();
  if (orbit.period_d !== undefined || orbit.period_range_d === undefined) {
    return before === undefined ? null : ephemerisOf(target, { direction, before: true });
  }
  const [low, high] = orbit.period_range_d;
  const zero = orbit.zero_bjd_tdb;
  return {
    period_d: Math.sqrt(low * high),
    period_error_d: 0,
    zero: zero === undefined ? spectra[0]!.mid : [Math.floor(zero), zero - Math.floor(zero)],
    zero_error_d: 0,
    covariance_d2: 0,
    period_derivative: 0,
    zero_marks: orbit.zero_marks,
  };
}

function superhump(session: Session) {
  const { superhump_excess, superhump_excess_error = 0 } = session.target.settings.binary;
  return superhump_excess === undefined
    ? null
    : { value: superhump_excess, error: superhump_excess_error };
}

/**
 * Makes `orbit.json` and `velocities.ecsv`, and with `refine` an improved target file.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @param options What more to do.
 * @param options.refine Whether to write an improved target file beside the old one. @default false
 * @returns Document, files, warnings.
 */
export async function runOrbit(
  session: Session,
  output: StepOutput,
  options: { refine?: boolean } = {},
): Promise<StepResult<OrbitDocument> & { readonly measurement: TargetOrbit }> {
  const { target } = session;
  const measurement = await session.orbit();
  const { inputs, warnings: reading } = await session.exposures();
  const warnings = uniqueWarnings([
    ...reading,
    ...measurement.trail_warnings,
    ...measurement.warnings,
  ]);
  const document: OrbitDocument = {
    ...outputHead(target, { schema: "orbit/1", inputs, warnings }),
    ...measurement.report,
  };
  const files = await writeStep([
    ["orbit.json", jsonText(document)],
    ["velocities.ecsv", formatEcsv(velocityTable(measurement.velocities, target.title))],
    ...await orbitPlate(session, measurement),
  ], output);
  const refined = options.refine
    ? await writeStep(
      [[`${target.name}-refined.toml`, refinedTarget(target, measurement.report)]],
      { folder: target.folder, overwrite: output.overwrite },
    )
    : [];
  return { document, files: [...files, ...refined], warnings, measurement };
}

/** Velocity curves and the diagrams behind them; masses where they were measured. */
async function orbitPlate(
  session: Session,
  measurement: TargetOrbit,
): Promise<[name: string, data: Uint8Array | string][]> {
  const { plate } = session.target.settings;
  const { line } = measurement;
  const subject = orbitSubject(measurement, { line: line.name });
  const rows: PanelName[][] = [
    [
      ...(subject.velocities === undefined ? [] : ["velocity-curve" as const]),
      ...(subject.diagnostic === undefined ? [] : ["diagnostic" as const]),
      ...(subject.light_centre === undefined ? [] : ["light-centre" as const]),
    ],
    [
      ...(subject.periodogram === undefined ? [] : ["periodogram" as const]),
      ...(subject.mass_plane === undefined ? [] : ["mass-plane" as const]),
      ...(subject.inclination_plane === undefined ? [] : ["inclination-plane" as const]),
    ],
  ];
  const shown = rows.filter((row) => row.length > 0);
  if (shown.length === 0) return [];
  const { drawPlate } = await import("../../figures/mod.ts");
  const drawn = drawPlate(
    { width: plate.width, letters: true, rows: shown.map((panels) => ({ panels })) },
    [{
      title: plate.title ?? session.target.title,
      line,
      systemic_kms: measurement.report.accretor?.systemic_kms ??
        measurement.report.donor?.systemic_kms ?? 0,
      method: "",
      binary: session.binary(),
      ...subject,
    }],
  );
  return figureFiles(drawn, { name: "orbit-plate", plate });
}

function velocityTable(rows: readonly VelocityRow[], title: string): EcsvTable {
  const texts = (key: "line" | "method" | "star" | "source") => ({
    name: key,
    datatype: "string" as const,
    values: rows.map((row) => row[key]),
  });
  const numbers = (
    key: Exclude<keyof VelocityRow, "line" | "method" | "star" | "source">,
    unit: string | undefined,
    description: string,
  ) => ({
    name: key,
    datatype: "float64" as const,
    unit,
    description,
    values: rows.map((row) => row[key]),
  });
  return {
    meta: { creator: "Millrace", version: VERSION, schema: "velocities/1", target: title },
    columns: [
      texts("line"),
      texts("method"),
      texts("star"),
      texts("source"),
      numbers("bjd_day", "d", "whole part of mid-exposure, BJD(TDB)"),
      numbers("bjd_fraction", "d", "fraction of mid-exposure, BJD(TDB)"),
      numbers("cycle", undefined, "cycle on the reported ephemeris"),
      numbers("phase", undefined, "phase on the reported ephemeris"),
      numbers("exposure_cycles", undefined, "length of the exposure, cycles"),
      numbers("velocity_kms", "km / s", "velocity, barycentric"),
      numbers("error_kms", "km / s", "one standard deviation"),
    ],
  };
}
