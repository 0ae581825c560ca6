import {
  type WeighedLine,
  type WeighOptions,
  type WeighRecord,
  weighRecord,
  weighTrail,
} from "../../weighing/mod.ts";
import { mappedLines } from "../line_of.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { pause } from "../pause.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { weighFigures } from "../weigh_figures.ts";
import { weighOptionsOf } from "../weigh_options.ts";
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
 * @param changes What is to differ from the target file: two sets and 20 trials without a limit give
 * a verdict in some seconds. Its sentence says how many trials there were. @default Nothing
 * @returns What was found.
 * @throws {InputError} When `[binary]` does not fix the orbital speeds.
 */
export async function weighLine(
  session: Session,
  line: LineSettings,
  changes: Pick<WeighOptions, "sets" | "trials" | "limit"> = {},
): Promise<WeighedLine> {
  const trail = await session.trail(line);
  await pause(session.signal);
  return weighTrail(trail, { ...await weighOptionsOf(session, line), ...changes });
}

/**
 * Makes `weigh.json`, hypotheses against each other, and a plate for each line.
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
    ...weighed.flatMap(({ trail, warnings }) =>
      warnings.map((warning) => ({ ...warning, line: trail.line.name }))
    ),
  ]);
  const document: WeighDocument = {
    ...outputHead(target, { schema: "weigh/1", inputs, warnings }),
    lines: weighed.map(weighRecord),
  };
  const files = await writeStep([
    ["weigh.json", jsonText(document)],
    ...await weighFigures(session, weighed),
  ], output);
  return { document, files, warnings };
}
