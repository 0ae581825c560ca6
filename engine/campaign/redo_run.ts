import { join } from "@std/path";
import { InputError } from "../errors.ts";
import { readBytes, sha256 } from "../files/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { inputDigests } from "./input_digests.ts";
import type { InputDigest } from "./output_head.ts";
import { recordedTarget, type RunRecord, type StepRecord, thisRuntime } from "./provenance.ts";
import { stepError } from "./record_step.ts";
import { openSession } from "./session.ts";
import { type StepName, stepTable } from "./step_table.ts";
import { VERSION } from "./version.ts";

/** One thing that is not as it was recorded. */
export interface Difference {
  /** What it is: a cause of differing outputs, or an output. */
  readonly kind: "version" | "runtime" | "target-file" | "input" | "output";
  /** Its name: a path from the target file or within the output folder. */
  readonly name: string;
  /** What differs. */
  readonly text: string;
}

/** What doing a run again has shown. */
export interface RedoneRun {
  /** The steps done again. */
  readonly commands: readonly string[];
  /** Files made again with the same bytes. */
  readonly same: readonly string[];
  /** What differs; empty when nothing does. */
  readonly differences: readonly Difference[];
}

/**
 * Does a recorded run again, from the text of the target file as it was recorded and the inputs where
 * they were, and compares every file with its digest.
 *
 * @param run The record.
 * @param options Where.
 * @param options.folder Folder of the record: paths start there.
 * @param options.out Folder for what is made now.
 * @param options.workers Number of workers. @default 1
 * @param options.progress Told how far the work has come.
 * @param options.signal Aborts the work.
 * @returns What is the same and what differs.
 */
export async function redoRun(
  run: RunRecord,
  options: {
    folder: string;
    out: string;
    workers?: number;
    progress?: Progress;
    signal?: AbortSignal;
  },
): Promise<RedoneRun> {
  const { folder, out, workers, progress, signal } = options;
  const target = recordedTarget(run, folder);
  const differences = await causes(run, { folder, signal });
  const steps = run.steps.filter(({ status }) => status === "done");
  const same: string[] = [];
  if (differences.some(({ kind, text }) => kind === "input" && text === MISSING)) {
    return { commands: [], same, differences };
  }
  const session = openSession(target, { workers, force: run.force, progress, signal });
  for (const step of steps) {
    signal?.throwIfAborted();
    try {
      const entry = stepTable[step.command as StepName];
      await entry.run(session, { folder: out, overwrite: true });
    } catch (error) {
      signal?.throwIfAborted();
      const { message } = stepError(error, { base: target.folder });
      differences.push({ kind: "output", name: step.command, text: message });
      continue;
    }
    await compare(step, { out, same, differences });
  }
  return { commands: steps.map(({ command }) => command), same, differences };
}

const MISSING = "it is missing";
const CHANGED = "it has changed since";

/** What may make the outputs differ: version, runtime, target file, inputs. */
async function causes(
  run: RunRecord,
  options: { folder: string; signal?: AbortSignal },
): Promise<Difference[]> {
  const { folder, signal } = options;
  const found: Difference[] = [];
  if (run.version !== VERSION) {
    found.push({
      kind: "version",
      name: "Millrace",
      text: `it was ${run.version} and is ${VERSION}`,
    });
  }
  const now = thisRuntime();
  for (const name of ["deno", "v8", "platform"] as const) {
    if (run.runtime[name] === now[name]) continue;
    found.push({
      kind: "runtime",
      name,
      text: `it was ${run.runtime[name]} and is ${now[name]}`,
    });
  }
  const path = join(folder, run.target_file);
  try {
    if (await Deno.readTextFile(path) !== run.target_text) {
      const text = `${CHANGED}; the recorded text is used`;
      found.push({ kind: "target-file", name: run.target_file, text });
    }
  } catch {
    const text = `${MISSING}; the recorded text is used`;
    found.push({ kind: "target-file", name: run.target_file, text });
  }
  return [...found, ...await changedInputs(run, { folder, signal })];
}

async function changedInputs(
  run: RunRecord,
  options: { folder: string; signal?: AbortSignal },
): Promise<Difference[]> {
  const target = recordedTarget(run, options.folder);
  const differences: Difference[] = [];
  const differ = (name: string, text: string) => differences.push({ kind: "input", name, text });
  for (const { file, sha256: digest } of run.inputs) {
    options.signal?.throwIfAborted();
    try {
      const bytes = await readBytes(join(target.folder, file), { decompress: false });
      if (sha256(bytes) !== digest) differ(file, CHANGED);
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      differ(file, MISSING);
    }
  }
  let named: readonly InputDigest[] = [];
  try {
    named = await inputDigests(target, options);
  } catch (error) {
    // Files that are missing have been named above.
    if (!(error instanceof InputError)) throw error;
  }
  for (const { file } of named) {
    if (!run.inputs.some((input) => input.file === file)) {
      differ(file, "it was not there, and a pattern of the target file finds it now");
    }
  }
  return differences;
}

async function compare(
  step: StepRecord,
  options: { out: string; same: string[]; differences: Difference[] },
): Promise<void> {
  const { out, same, differences } = options;
  for (const { file, bytes, sha256: digest } of step.files) {
    // What a call has put elsewhere, as an improved target file, is not made again.
    if (file.startsWith("..")) continue;
    const differ = (text: string) => differences.push({ kind: "output", name: file, text });
    let made: Uint8Array;
    try {
      made = await Deno.readFile(join(out, file));
    } catch {
      differ("it was not made this time");
      continue;
    }
    if (sha256(made) === digest) same.push(file);
    else if (made.length === bytes) differ("its bytes differ");
    else differ(`it had ${bytes} bytes and has ${made.length}`);
  }
}
