import { dirname, join, relative, resolve } from "@std/path";
import {
  type Difference,
  PROVENANCE_FILE,
  readProvenanceFile,
  type RedoneRun,
  redoRun,
  VERSION,
} from "../../engine/campaign/mod.ts";
import { InputError, WorkError } from "../../engine/errors.ts";
import { makeFolder } from "../../engine/files/mod.ts";
import { commandWith, type CommonOptions } from "../common_options.ts";
import { type CommandContext, type CommandResult, runCommand } from "../run_command.ts";
import { tableLines } from "../terminal/table.ts";

/**
 * `millrace redo`: a recorded run once more.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const redoCommand = (finish: (status: number) => void) =>
  commandWith("redo", "the same run again: the same bytes, or what differs")
    .argument("<provenance>", `a ${PROVENANCE_FILE}`)
    .action(async (file, options) => {
      finish(await runCommand(options, (context) => redo(file, { call: options, context })));
    });

async function redo(
  file: string,
  options: { call: CommonOptions; context: CommandContext },
): Promise<CommandResult> {
  const { call, context: { signal, progress, console } } = options;
  if (call.set !== undefined || call.seed !== undefined) {
    throw new InputError({
      action: "redo the run",
      rule: "--set and --seed must not be given: the recorded ones are used",
    });
  }
  const provenance = await readProvenanceFile(file);
  const folder = dirname(file);
  if (call.out !== undefined && resolve(call.out) === resolve(folder)) {
    throw new InputError({
      action: "redo the run",
      rule: "what is made again must not replace what it is compared with",
      value: call.out,
      key: "--out",
    });
  }
  // Without --out the files are made in a folder beside the old ones and removed when compared.
  const out = call.out ?? join(folder, `.millrace-redo-${Deno.pid}`);
  await makeFolder(out);
  const redone: RedoneRun[] = [];
  try {
    for (const run of provenance.runs) {
      redone.push(await redoRun(run, { folder, out, workers: call.workers, progress, signal }));
    }
  } finally {
    if (call.out === undefined) await Deno.remove(out, { recursive: true });
  }
  const same = redone.flatMap((run) => run.same);
  const differences = redone.flatMap((run) => run.differences);
  const outputs = differences.filter(({ kind }) => kind === "output" || kind === "input");
  const lines = [
    `  ${
      redone.flatMap(({ commands }) => commands).join(", ")
    }: ${same.length} files with the same bytes`,
    ...differenceLines(differences),
  ];
  if (outputs.length > 0) {
    console.status("");
    if (!call.json) { for (const line of lines) console.out(line); }
    throw new WorkError({
      action: "make the same bytes again",
      reason: outputs.map(({ name, text }) => `${name}: ${text}`).slice(0, 4).join("; ") +
        (outputs.length > 4 ? `; and ${outputs.length - 4} more` : ""),
      file: relative(Deno.cwd(), resolve(file)),
    });
  }
  return {
    document: { schema: "redo/1", version: VERSION, same, differences },
    lines,
    files: call.out === undefined ? [] : same.map((name) => join(out, name)),
    warnings: [],
  };
}

function differenceLines(differences: readonly Difference[]): string[] {
  if (differences.length === 0) return [];
  return [
    "",
    ...tableLines([
      ["differs", "", "what"],
      ...differences.map(({ kind, name, text }) => [kind, name, text]),
    ], { heading: true }),
  ];
}
