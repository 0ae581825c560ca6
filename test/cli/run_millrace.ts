import { fromFileUrl } from "@std/path";

const MAIN = fromFileUrl(new URL("../../cli/main.ts", import.meta.url));
const CONFIG = fromFileUrl(new URL("../../deno.json", import.meta.url));

/** What a run of the command line left. */
export interface Run {
  readonly code: number;
  readonly stdout: string;
  readonly stderr: string;
}

/** Arguments that start the command line as users do: read and write permission only. */
export const LAUNCH: readonly string[] = [
  "run",
  "--v8-flags=--single-threaded-gc",
  "--no-prompt",
  "--cached-only",
  "--config",
  CONFIG,
  "--allow-read",
  "--allow-write",
  MAIN,
];

/** Runs the command line as a child process. */
export async function runMillrace(
  args: readonly string[],
  options: { cwd?: string } = {},
): Promise<Run> {
  const { code, stdout, stderr } = await new Deno.Command(Deno.execPath(), {
    args: [...LAUNCH, ...args],
    cwd: options.cwd,
    stdin: "null",
    env: { NO_COLOR: "1" },
  }).output();
  const decoder = new TextDecoder();
  return { code, stdout: decoder.decode(stdout), stderr: decoder.decode(stderr) };
}
