import { openSession, outputFolder, readTarget, type Session } from "../engine/campaign/mod.ts";
import type { StepOutput } from "../engine/campaign/mod.ts";
import { commandWith, type CommonOptions } from "./common_options.ts";
import { type CommandContext, type CommandResult, runCommand } from "./run_command.ts";

/** What a command on a target is given. */
export interface TargetContext extends CommandContext {
  /** The target at work. */
  readonly session: Session;
  /** Where to write. */
  readonly output: StepOutput;
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
  const { call, context, force } = options;
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
  };
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
            async (context) => parts.run(await openTarget(file, { call: options, context })),
          ),
        );
      });
}
