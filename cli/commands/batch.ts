import { dirname, join } from "@std/path";
import {
  type BatchDocument,
  batchJobs,
  type BatchNews,
  type BatchReport,
  type BatchResult,
  gatherBatch,
  type JobOutcome,
  type Manifest,
  parsePart,
  type Part,
  readManifest,
  runBatch,
} from "../../engine/campaign/mod.ts";
import { InputError, WorkError } from "../../engine/errors.ts";
import type { Progress } from "../../engine/workers/mod.ts";
import { utcNow } from "../clock.ts";
import { commandWith, type CommonOptions } from "../common_options.ts";
import { type CommandContext, type CommandResult, runCommand } from "../run_command.ts";
import { durationText } from "../terminal/duration.ts";
import { tableLines } from "../terminal/table.ts";

type BatchCall = CommonOptions & { part?: string; gather?: true; force?: true };

/**
 * `millrace batch`: many targets, unattended.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const batchCommand = (finish: (status: number) => void) =>
  commandWith("batch", "many targets, unattended: figures, one table, a page; what is done is kept")
    .argument("<manifest>", "manifest (TOML): targets, commands, settings")
    .option("--force", "make maps in spite of a large gap in phase; the figures say so")
    .option("--part <i/n>", "do one share of n, as a task of a cluster's array job")
    .option("--gather", "join what the shares have made; name what is missing")
    .action(async (file, options) => {
      finish(await runCommand(options, (context) => batch(file, { call: options, context })));
    });

async function batch(
  file: string,
  options: { call: BatchCall; context: CommandContext },
): Promise<CommandResult> {
  const { call, context } = options;
  if (call.part !== undefined && call.gather) {
    throw new InputError({
      action: "run batch",
      rule: "--part and --gather must not stand together: gather when all parts have ended",
    });
  }
  const manifest = await readManifest(file);
  const folder = call.out ?? join(dirname(file), manifest.name);
  const part = call.part === undefined ? undefined : parsePart(call.part);
  const owner = `millrace batch ${file}${call.part === undefined ? "" : ` --part ${call.part}`}`;
  const common = {
    folder,
    owner,
    set: call.set,
    seed: call.seed,
    force: call.force,
    overwrite: call.overwrite,
    now: utcNow,
    signal: context.signal,
  };
  if (call.gather) {
    const jobs = batchJobs(manifest, common);
    return told(await gatherBatch(manifest, { ...common, jobs }), { manifest, call, context });
  }
  const { stop, ...news } = newsTeller(context);
  const report = await runBatch(manifest, {
    ...common,
    ...news,
    part,
    workers: call.workers ?? navigator.hardwareConcurrency,
    module: new URL("../batch_worker.ts", import.meta.url),
  }).finally(stop);
  return report.result === null
    ? partTold(report, { part: part!, call, context })
    : told(report.result, { manifest, call, context });
}

/** Tells of each target: on a terminal in one line that changes, else in a line each. */
function newsTeller(
  { console }: CommandContext,
): { onTarget: (news: BatchNews) => void; progress: Progress; stop: () => void } {
  const started = performance.now();
  let count = "";
  let left_s: number | null = null;
  let told = started;
  let detail = "";
  const show = () => {
    const since = (performance.now() - told) / 1000;
    const left = left_s === null ? "" : `, ${durationText(left_s - since)} left`;
    console.status(count === "" ? detail : `${count}${left}${detail === "" ? "" : `; ${detail}`}`);
  };
  // The line goes on counting down while a long target is at work.
  const timer = setInterval(show, 1000);
  return {
    onTarget({ outcome, done, total, done_fraction }) {
      told = performance.now();
      const passed = (told - started) / 1000;
      // A guess from the first twentieth would mislead.
      left_s = done === total || done_fraction < 0.05
        ? null
        : (passed / done_fraction) * (1 - done_fraction);
      count = `${done} of ${total} targets`;
      detail = "";
      if (!console.onTerminal) {
        const left = left_s === null ? "" : `, ${durationText(left_s)} left`;
        console.err(`${count}${left}: ${outcomeText(outcome)}`);
      } else if (firstError(outcome) !== null) console.err(outcomeText(outcome));
      if (done < total) show();
    },
    progress(done, total, what) {
      detail = `${what}: ${done} of ${total}`;
    },
    stop: () => clearInterval(timer),
  };
}

function outcomeText(outcome: JobOutcome): string {
  const error = firstError(outcome);
  if (error !== null) return `${outcome.name} failed: ${error}`;
  const steps = outcome.runs.flatMap(({ steps }) => steps);
  const made = steps.filter(({ status }) => status === "made").length;
  return `${outcome.name} done${
    made === steps.length ? "" : made === 0 ? " before" : `, ${steps.length - made} steps kept`
  }`;
}

function firstError(outcome: JobOutcome): string | null {
  return outcome.runs.find(({ error }) => error !== null)?.error?.message ?? null;
}

function partTold(
  { outcomes, cost }: BatchReport,
  options: { part: Part; call: BatchCall; context: CommandContext },
): CommandResult {
  const { part, call, context } = options;
  const failed = outcomes.filter((outcome) => firstError(outcome) !== null);
  const lines = [
    `  part ${part.index} of ${part.count}: ${outcomes.length} targets, ${failed.length} failed`,
  ];
  if (failed.length > 0) {
    refuse({ failed: failed.map(({ name }) => name), missing: [], lines, call, context });
  }
  return {
    document: { schema: "batch-part/1", part, cost, outcomes },
    lines,
    files: [],
    warnings: [],
  };
}

function told(
  { document, files }: BatchResult,
  options: { manifest: Manifest; call: BatchCall; context: CommandContext },
): CommandResult {
  const { call, context } = options;
  const lines = resultLines(document);
  const { failed, missing } = document;
  if (failed.length + missing.length + document.plate_errors.length > 0) {
    const plates = document.plate_errors.map(({ plate }) => `sample plate ${plate}`);
    refuse({ failed: [...failed, ...plates], missing, lines, files, call, context });
  }
  return { document, lines, files, warnings: [] };
}

/** Prints what there is, and ends with the count of what there is not. */
function refuse(what: {
  failed: readonly string[];
  missing: readonly string[];
  lines: readonly string[];
  files?: readonly string[];
  call: BatchCall;
  context: CommandContext;
}): never {
  const { failed, missing, lines, files = [], call, context: { console } } = what;
  console.status("");
  if (!call.json) {
    for (const line of lines) console.out(line);
    for (const file of files) console.out(`wrote ${file}`);
  }
  const names = (list: readonly string[]) =>
    list.length > 6 ? `${list.slice(0, 6).join(", ")}, …` : list.join(", ");
  throw new WorkError({
    action: "finish the batch",
    reason: [
      ...(failed.length > 0 ? [`${failed.length} failed (${names(failed)})`] : []),
      ...(missing.length > 0 ? [`${missing.length} not made (${names(missing)})`] : []),
    ].join(", "),
    remedy: "mend what is named and run the same again: what is done is kept",
  });
}

function resultLines(document: BatchDocument): string[] {
  const { target_count, failed, missing, runs, cost } = document;
  const undone = runs.filter(({ status }) => status !== "done");
  const done = target_count - new Set(undone.map(({ name }) => name)).size;
  return [
    `  ${document.title}: ${target_count} targets, ${done} done, ${failed.length} failed${
      missing.length === 0 ? "" : `, ${missing.length} not made`
    }`,
    ...(cost === null
      ? []
      : [`  highest memory seen: ${(cost.peak_memory_bytes / 2 ** 20).toFixed(0)} MiB`]),
    ...(undone.length === 0 ? [] : [
      "",
      ...tableLines([
        ["target", "variant", "why"],
        ...undone.map((run) => [
          run.name,
          run.variant ?? "",
          run.error?.message ?? `not made: ${
            run.steps.filter(({ status }) => status === "missing")
              .map(({ command }) => command).join(", ")
          }`,
        ]),
      ], { heading: true }),
    ]),
    ...document.plate_errors.map(({ plate, message }) => `  sample plate ${plate}: ${message}`),
  ];
}
