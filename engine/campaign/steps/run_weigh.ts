import { phaseError } from "../../binary/mod.ts";
import {
  type GeometryErrors,
  type WeighedLine,
  type WeighRecord,
  weighRecord,
  weighTrail,
} from "../../weighing/mod.ts";
import { mappedLines } from "../line_of.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { pause } from "../pause.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { modelOf } from "../model_of.ts";
import { needed } from "../target.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** `weigh.json`. */
export interface WeighDocument extends OutputHead {
  /** One entry a line. */
  readonly lines: readonly WeighRecord[];
}

/**
 * Weighs the hypotheses of `[weigh]` on one line.
 *
 * @param session The target at work.
 * @param line The line.
 * @returns What was found.
 * @throws {InputError} When `[binary]` does not fix the orbital speeds.
 */
export async function weighLine(session: Session, line: LineSettings): Promise<WeighedLine> {
  const { target } = session;
  const { weigh } = target.settings;
  const trail = await session.trail(line);
  await pause(session.signal);
  const { parts: _parts, ...known } = await modelOf(target, { settings: line, line: trail.line });
  return weighTrail(trail, {
    binary: needed(target, {
      value: session.binary(),
      key: "binary (any numbers that fix K1 and K2)",
      action: "weigh hypotheses",
    }),
    systemic_kms: (await session.systemic()).kms,
    model: known,
    errors: await geometryErrors(session),
    sets: weigh.sets,
    trials: weigh.trials,
    seed: target.settings.seed,
    workers: session.workers,
    reach_kms: line.reach_kms,
    progress: session.progress,
    signal: session.signal,
  });
}

/** What the target file says of the errors of the geometry. */
async function geometryErrors(session: Session): Promise<GeometryErrors> {
  const { binary, orbit } = session.target.settings;
  const ephemeris = await session.ephemeris();
  const { spectra } = await session.exposures();
  const middle = spectra[Math.floor(spectra.length / 2)]!.mid;
  return {
    k_accretor_kms: binary.k_accretor_error_kms ?? 0,
    k_donor_kms: binary.k_donor_error_kms ?? 0,
    mass_ratio: binary.mass_ratio_error ?? 0,
    systemic_kms: orbit.systemic_error_kms ?? 0,
    phase: phaseError(ephemeris, middle),
  };
}

/**
 * Makes `weigh.json`: hypotheses against each other.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 */
export async function runWeigh(
  session: Session,
  output: StepOutput,
): Promise<StepResult<WeighDocument>> {
  const { target } = session;
  const weighed: WeighedLine[] = [];
  for (const line of mappedLines(session.lines("weigh hypotheses"))) {
    weighed.push(await weighLine(session, line));
  }
  const { inputs, warnings: reading } = await session.exposures();
  const warnings = uniqueWarnings([
    ...reading,
    ...(await session.systemic()).warnings,
    ...weighed.flatMap((line) => line.warnings),
  ]);
  const document: WeighDocument = {
    ...outputHead(target, { schema: "weigh/1", inputs, warnings }),
    lines: weighed.map(weighRecord),
  };
  const files = await writeStep([["weigh.json", jsonText(document)]], output);
  return { document, files, warnings };
}
