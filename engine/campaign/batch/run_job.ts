import { dirname, join } from "@std/path";
import { InputError } from "../../errors.ts";
import type { Progress } from "../../workers/mod.ts";
import { holdFolder } from "../hold_folder.ts";
import { inputDigests } from "../input_digests.ts";
import {
  type Provenance,
  readProvenance,
  type RunRecord,
  type StepError,
  type StepRecord,
  withoutStep,
  withStep,
  writeProvenance,
} from "../provenance.ts";
import { type Clock, doneStep, filesIntact, openRecord, stepError } from "../record_step.ts";
import { openSession, type Session } from "../session.ts";
import { type StepName, stepTable } from "../step_table.ts";
import { readTarget, type Target } from "../target.ts";
import { keepResults } from "./keep_results.ts";
import { removeRecorded } from "./remove_recorded.ts";
import type { BatchJob, JobRun } from "./batch_jobs.ts";

/** What became of one step. */
export interface StepOutcome {
  /** The command. */
  readonly command: StepName;
  /** Kept from before, made now, or failed. */
  readonly status: "kept" | "made" | "failed";
}

/** What became of one treatment of a target. */
export interface RunOutcome {
  /** Name of the variant; null for the target's own treatment. */
  readonly variant: string | null;
  /** One entry a step; none when the target could not be read. */
  readonly steps: readonly StepOutcome[];
  /** The first error; null when all is done. */
  readonly error: StepError | null;
}

/** What became of one target. */
export interface JobOutcome {
  /** Name of the target. */
  readonly name: string;
  /** One entry a treatment. */
  readonly runs: readonly RunOutcome[];
}

/** How a job is run. */
export interface JobOptions {
  /** Folder of the batch. */
  readonly folder: string;
  /** Who runs it, for the message that another run gets. */
  readonly owner: string;
  /** Whether files that Millrace did not write may be replaced. @default {false} */
  readonly overwrite?: boolean;
  /** The clock. @default None: times are not recorded */
  readonly now?: Clock;
  /** Told how far the work has come. @default None */
  readonly progress?: Progress;
  /** Aborts the work. @default None */
  readonly signal?: AbortSignal;
}

/**
 * Does all that is to be done to one target. A step whose inputs, settings and version are those
 * recorded, and whose files are as they were written, is kept; any other is begun again. An error
 * is recorded and does not stop the steps that come after.
 *
 * @param job The target and its treatments.
 * @param options Where and how.
 * @returns What became of it.
 * @throws {DOMException} AbortError when the signal was raised; nothing else.
 */
export async function runJob(job: BatchJob, options: JobOptions): Promise<JobOutcome> {
  const runs: RunOutcome[] = [];
  for (const run of job.runs) {
    try {
      const { folder, owner } = options;
      const target = await jobTarget(job, run);
      runs.push(
        await holdFolder(
          join(folder, run.folder),
          () =>
            runSteps(target, {
              ...options,
              run,
              folder: join(folder, run.folder),
              force: job.force,
            }),
          { owner },
        ),
      );
    } catch (error) {
      options.signal?.throwIfAborted();
      const failed = stepError(error, { base: dirname(job.file) });
      runs.push({ variant: run.variant, steps: [], error: failed });
    }
  }
  return { name: job.name, runs };
}

/**
 * The target of a job with the overrides of one of its treatments.
 *
 * @param job The job.
 * @param run The treatment.
 * @returns The target.
 * @throws {InputError} When it cannot be read, or an override of the manifest is wrong.
 */
export async function jobTarget(job: BatchJob, run: JobRun): Promise<Target> {
  const { file, seed } = job;
  try {
    return await readTarget(file, { set: run.set, seed });
  } catch (error) {
    if (!(error instanceof InputError) || error.file !== "--set") throw error;
    throw new InputError({ ...error, file: `set of ${job.name}` });
  }
}

async function runSteps(
  target: Target,
  options: JobOptions & { run: JobRun; force: boolean },
): Promise<RunOutcome> {
  const { run, folder, force, signal, progress } = options;
  const inputs = await inputDigests(target, { signal });
  const record = openRecord(target, { inputs, folder, force });
  const keeper = keepResults(folder, record.key);
  const session = openSession(target, { force, keep: keeper.keep, signal, progress });
  const steps: StepOutcome[] = [];
  let provenance = await readProvenance(folder);
  let first: StepError | null = null;
  for (const command of run.commands) {
    signal?.throwIfAborted();
    const known = provenance?.runs.find(({ key }) => key === record.key)?.steps
      .find((step) => step.command === command && step.status === "done");
    if (known !== undefined && await filesIntact(folder, known)) {
      steps.push({ command, status: "kept" });
      continue;
    }
    provenance = await forget(command, { provenance, record, folder });
    const step = await tryStep(command, { ...options, session, base: target.folder });
    try {
      provenance = withStep(provenance, record, step);
      await writeProvenance(folder, provenance);
    } catch (error) {
      first ??= stepError(error, { base: target.folder });
    }
    first ??= step.error;
    steps.push({ command, status: step.status === "done" ? "made" : "failed" });
  }
  await keeper.clear();
  return { variant: run.variant, steps, error: first };
}

/** Takes out what an earlier run of other settings or inputs left of a step: record, then files. */
async function forget(
  command: StepName,
  options: { provenance: Provenance | null; record: Omit<RunRecord, "steps">; folder: string },
): Promise<Provenance | null> {
  const { provenance, record, folder } = options;
  const old = provenance?.runs.filter(({ key }) => key !== record.key)
    .flatMap(({ steps }) => steps).find((step) => step.command === command);
  if (old === undefined) return provenance;
  const rest = withoutStep(provenance, command);
  await writeProvenance(folder, rest);
  await removeRecorded(folder, old);
  return rest;
}

async function tryStep(
  command: StepName,
  options: JobOptions & { session: Session; base: string },
): Promise<StepRecord> {
  const { session, folder, overwrite, now, signal, base } = options;
  const started = now?.() ?? null;
  try {
    const result = await stepTable[command].run(session, { folder, overwrite });
    return await doneStep(command, { result, folder, started, now });
  } catch (error) {
    signal?.throwIfAborted();
    return {
      command,
      status: "failed",
      started,
      ended: now?.() ?? null,
      files: [],
      warnings: [],
      error: stepError(error, { base }),
    };
  }
}
