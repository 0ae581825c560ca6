import {
  gatherShares,
  parsePart,
  runShare,
  type SharedStep,
  type StepResult,
  VERSION,
} from "../engine/campaign/mod.ts";
import { InputError } from "../engine/errors.ts";
import type { CommandResult } from "./run_command.ts";
import type { TargetContext } from "./target_command.ts";

/** Options of a command whose trials can be divided among processes. */
export interface PartCall {
  /** `I/N`: one share. */
  readonly part?: string;
  /** Whether to make the outputs from what the shares have done. */
  readonly gather?: boolean;
}

/**
 * Runs a step whole, or one share of its trials, or makes its outputs from the shares.
 *
 * @param step The step.
 * @param context The target at work.
 * @param parts What to do.
 * @param parts.call The options of the call.
 * @param parts.run Does it whole.
 * @param parts.lines The table for a person.
 * @returns What to print.
 */
export async function runInParts<T>(
  step: SharedStep,
  { session, output }: TargetContext,
  parts: {
    call: PartCall;
    run: () => Promise<StepResult<T>>;
    lines: (document: T) => readonly string[];
  },
): Promise<CommandResult> {
  const { call, run, lines } = parts;
  if (call.part !== undefined && call.gather) {
    throw new InputError({
      action: `run ${step}`,
      rule: "--part and --gather must not stand together: gather when all parts have ended",
    });
  }
  if (call.part !== undefined) {
    const part = parsePart(call.part);
    const { folder } = output;
    const owner = `millrace ${step} ${session.target.file} --part ${call.part}`;
    await runShare(step, session, { folder, part, owner });
    return {
      document: { schema: `${step}-part/1`, version: VERSION, part },
      lines: [`  part ${part.index} of ${part.count} is done: --gather makes the outputs`],
      files: [],
      warnings: [],
    };
  }
  const result = call.gather ? await gatherShares(run, output) : await run();
  return { ...result, lines: lines(result.document) };
}
