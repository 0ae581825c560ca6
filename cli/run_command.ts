import type { Warning } from "../engine/errors.ts";
import type { Progress } from "../engine/workers/mod.ts";
import type { CommonOptions } from "./common_options.ts";
import { INTERRUPTED, listenForInterrupt } from "./interrupt.ts";
import { type Console, openConsole } from "./terminal/console.ts";

/** What a command hands back to be printed. */
export interface CommandResult {
  /** The one JSON document of `--json`. */
  readonly document: unknown;
  /** The table for a person. */
  readonly lines: readonly string[];
  /** Files written. */
  readonly files: readonly string[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** What a command is given while it runs. */
export interface CommandContext {
  /** Where news goes. */
  readonly console: Console;
  /** Aborted on an interrupt. */
  readonly signal: AbortSignal;
  /** Shows how far the work has come. */
  readonly progress: Progress;
}

/**
 * Runs one command: listens for an interrupt, shows progress, prints what came out.
 *
 * @param options The options of the call.
 * @param work The command.
 * @returns The exit status: 0 done, 130 interrupted. Errors pass through.
 */
export async function runCommand(
  options: CommonOptions,
  work: (context: CommandContext) => Promise<CommandResult>,
): Promise<number> {
  const console = openConsole({ quiet: options.quiet });
  const interrupt = listenForInterrupt(() => {
    console.status("");
    Deno.exitCode = INTERRUPTED;
  });
  const started = performance.now();
  const progress: Progress = (done, total, what) => {
    if (performance.now() - started < 1000) return;
    console.status(`${what}: ${done} of ${total}`);
  };
  try {
    const result = await work({ console, signal: interrupt.signal, progress });
    if (interrupt.signal.aborted) return INTERRUPTED;
    console.status("");
    if (options.json) console.out(JSON.stringify(result.document, null, 2));
    else {
      for (const line of result.lines) console.out(line);
      for (const file of result.files) console.out(`wrote ${file}`);
    }
    for (const { code, text, line } of result.warnings) {
      console.err(`warning: ${line === undefined ? "" : `${line}: `}${text} [${code}]`);
    }
    return 0;
  } catch (error) {
    console.status("");
    if (interrupt.signal.aborted) return INTERRUPTED;
    throw error;
  } finally {
    interrupt.stop();
  }
}
