import { join } from "@std/path";
import { withTaskStore } from "../../workers/mod.ts";
import { mappedLines } from "../line_of.ts";
import type { Session } from "../session.ts";
import { weighLine } from "../steps/run_weigh.ts";
import type { StepOutput, StepResult } from "../steps/step.ts";
import { clearParts, holdPart } from "./hold_part.ts";
import type { Part } from "./share_jobs.ts";
import { SHARES_FOLDER, shareTasks } from "./share_tasks.ts";

/** A step whose trials or resamples can be divided. */
export type SharedStep = "map" | "weigh";

/** What makes the trials of each step, its results thrown away. */
const work: Readonly<Record<SharedStep, (session: Session) => Promise<void>>> = {
  async map(session) {
    for (const line of mappedLines(session.lines("make the velocity map"))) await session.map(line);
  },
  async weigh(session) {
    for (const line of mappedLines(session.lines("weigh hypotheses"))) {
      await weighLine(session, line);
    }
  },
};

/**
 * Does one share of a step's trials or resamples, together with other processes in the same folder.
 * Numbers of trials are tied to their streams of chance: who does which makes no difference.
 *
 * @param step The step.
 * @param session The target at work.
 * @param options Where, and which share.
 * @param options.folder Folder of the outputs, common to all.
 * @param options.part The share; after it come trials that nobody has in hand.
 * @param options.owner Who does it, for the message that another run gets. @default "millrace"
 * @throws {WorkError} When another process does the same part.
 */
export async function runShare(
  step: SharedStep,
  session: Session,
  options: { folder: string; part: Part; owner?: string },
): Promise<void> {
  const { folder, part, owner = "millrace" } = options;
  const { workers } = session;
  await holdPart(
    folder,
    () => withTaskStore(shareTasks(folder, { part, workers }), () => work[step](session)),
    { part, owner },
  );
}

/**
 * Makes a step's outputs from the trials that shares have made: the same bytes as one process alone
 * would have written. The trials are removed afterwards.
 *
 * @typeParam T The step's document.
 * @param run The step.
 * @param output Where to write.
 * @returns What the step gives.
 * @throws {WorkError} When trials are missing, naming them.
 */
export async function gatherShares<T>(
  run: () => Promise<StepResult<T>>,
  output: StepOutput,
): Promise<StepResult<T>> {
  const result = await withTaskStore(shareTasks(output.folder, { part: null }), run);
  await Deno.remove(join(output.folder, SHARES_FOLDER), { recursive: true }).catch(() => {});
  await clearParts(output.folder);
  return result;
}
