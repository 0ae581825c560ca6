import { join, relative } from "@std/path";
import { InputError, NotConverged, WorkError } from "../errors.ts";
import { readBytes, sha256 } from "../files/mod.ts";
import { holdFolder } from "./hold_folder.ts";
import { inputDigests } from "./input_digests.ts";
import type { InputDigest } from "./output_head.ts";
import {
  identityKey,
  readProvenance,
  recordedPath,
  runIdentity,
  type RunRecord,
  type StepError,
  type StepRecord,
  thisRuntime,
  withStep,
  writeProvenance,
  type WrittenFile,
} from "./provenance.ts";
import type { StepOutput, StepResult } from "./steps/step.ts";
import type { Target } from "./target.ts";

/** Tells the time for the provenance, ISO 8601 in UTC: the engine reads no clock itself. */
export type Clock = () => string;

/** The record of a run, as far as it is known before any of its steps. */
export function openRecord(
  target: Target,
  options: { inputs: readonly InputDigest[]; folder: string; force?: boolean },
): Omit<RunRecord, "steps"> {
  const identity = runIdentity(target, options);
  return {
    key: identityKey(identity),
    ...identity,
    target_file: recordedPath(target, options.folder),
    runtime: thisRuntime(),
  };
}

/** The files of a step, as they are now. */
async function writtenFiles(folder: string, paths: readonly string[]): Promise<WrittenFile[]> {
  const files: WrittenFile[] = [];
  for (const path of paths) {
    const bytes = await readBytes(path, { decompress: false, max_bytes: Infinity });
    files.push({ file: relative(folder, path), bytes: bytes.length, sha256: sha256(bytes) });
  }
  return files;
}

/**
 * Runs a step of one command and records it in the folder's `provenance.json`: what it was made
 * from, when, and the digest of every file.
 *
 * @typeParam T What the step gives: files and warnings, and what else it likes.
 * @param target The target.
 * @param work The step.
 * @param work.command The command.
 * @param work.run Does it, and writes into the folder.
 * @param options Where, and the time.
 * @param options.output Where the step writes.
 * @param options.force Whether maps are made in spite of a large gap in phase. @default false
 * @param options.now The clock; times are null without one.
 * @param options.signal Aborts the work.
 * @returns What the step gives, `provenance.json` among its files.
 * @throws {WorkError} When another run is at work in the folder.
 */
export function recordStep<T extends Pick<StepResult<unknown>, "files" | "warnings">>(
  target: Target,
  work: { command: string; run: () => Promise<T> },
  options: { output: StepOutput; force?: boolean; now?: Clock; signal?: AbortSignal },
): Promise<T> {
  const { output: { folder }, force, now, signal } = options;
  return holdFolder(folder, async () => {
    const inputs = await inputDigests(target, { signal });
    const record = openRecord(target, { inputs, folder, force });
    const started = now?.() ?? null;
    const result = await work.run();
    const step = await doneStep(work.command, { result, folder, started, now });
    const path = await writeProvenance(
      folder,
      withStep(await readProvenance(folder), record, step),
    );
    return { ...result, files: [...result.files, path] };
  }, { owner: `millrace ${work.command} ${target.file}` });
}

/** The record of a step that was done. */
export async function doneStep(
  command: string,
  options: {
    result: Pick<StepResult<unknown>, "files" | "warnings">;
    folder: string;
    started: string | null;
    now?: Clock;
  },
): Promise<StepRecord> {
  const { result, folder, started, now } = options;
  return {
    command,
    status: "done",
    started,
    ended: now?.() ?? null,
    files: await writtenFiles(folder, result.files),
    warnings: result.warnings,
    error: null,
  };
}

/**
 * An error as a record keeps it.
 *
 * @param error What was thrown.
 * @param options What to leave out.
 * @param options.base Folder whose path is taken out of the message, so that it reads the same
 * wherever the campaign lies.
 * @returns The record.
 */
export function stepError(error: unknown, options: { base?: string } = {}): StepError {
  const known = error instanceof InputError || error instanceof WorkError ||
    error instanceof NotConverged;
  const message = known
    ? error.message
    : error instanceof Error
    ? `${error.name}: ${error.message}`
    : String(error);
  const { base = "" } = options;
  return {
    kind: known ? error.name as StepError["kind"] : "fault",
    message: base === "" ? message : message.replaceAll(base.replace(/\/?$/, "/"), ""),
  };
}

/** Whether all files of a step are as they were written. */
export async function filesIntact(folder: string, step: StepRecord): Promise<boolean> {
  for (const { file, bytes, sha256: digest } of step.files) {
    try {
      const found = await Deno.readFile(join(folder, file));
      if (found.length !== bytes || sha256(found) !== digest) return false;
    } catch {
      return false;
    }
  }
  return true;
}
