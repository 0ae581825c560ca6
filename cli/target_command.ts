import {
  openSession,
  outputFolder,
  readTarget,
  recordStep,
  type Session,
} from "../engine/campaign/mod.ts";
import type { StepOutput, StepResult } from "../engine/campaign/mod.ts";
import { utcNow } from "./clock.ts";
import { commandWith, type CommonOptions } from "./common_options.ts";
import { type CommandContext, type CommandResult, runCommand } from "./run_command.ts";

/** What a command on a target is given. */
export interface TargetContext extends CommandContext {
  /** The target at work. */
  readonly session: Session;
  /** Where to write. */
  readonly output: StepOutput;
  /** Whether maps are made in spite of a large gap in phase. */
  readonly force: boolean;
}

/**
 * Opens the target of a call.
 *
 * @param file The target file.
 * @param options Options of the call and the running command.
 * @returns The session and where to write.
 */
export async function openTarget(
  file: string,
  options: { call: CommonOptions; context: CommandContext; force?: boolean },
): Promise<TargetContext> {
  const { call, context, force = false } = options;
  const target = await readTarget(file, { set: call.set, seed: call.seed });
  return {
    ...context,
    session: openSession(target, {
      workers: call.workers,
      force,
      progress: context.progress,
      signal: context.signal,
    }),
    output: { folder: outputFolder(target, call.out), overwrite: call.overwrite },
    force,
  };
}

/**
 * Runs a step and records it in the output folder's `provenance.json`.
 *
 * @typeParam T What the step gives.
 * @param command The command.
 * @param context The target at work.
 * @param run The step.
 * @returns What the step gives, `provenance.json` among its files.
 */
export function recorded<T extends Pick<StepResult<unknown>, "files" | "warnings">>(
  command: string,
  context: TargetContext,
  run: () => Promise<T>,
): Promise<T> {
  const { session: { target }, output, force, signal } = context;
  return recordStep(target, { command, run }, { output, force, now: utcNow, signal });
}

/**
 * A command on one target file that has no options of its own.
 *
 * @param name Its name.
 * @param parts What it does.
 * @returns A function that makes the command.
 */
export function targetCommand(
  name: string,
  parts: {
    summary: string;
    run: (context: TargetContext) => Promise<CommandResult>;
  },
) {
  return (finish: (status: number) => void) =>
    commandWith(name, parts.summary)
      .argument("<target>", "target file")
      .action(async (file, options) => {
        finish(
          await runCommand(
            options,
            async (context) => {
              const opened = await openTarget(file, { call: options, context });
              return recorded(name, opened, () => parts.run(opened));
            },
          ),
        );
      });
}
