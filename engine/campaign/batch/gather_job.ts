import { dirname, join } from "@std/path";
import type { Warning } from "../../errors.ts";
import { inputDigests } from "../input_digests.ts";
import { uniqueWarnings } from "../output_head.ts";
import { readProvenance, type StepError, type StepRecord } from "../provenance.ts";
import { openRecord, stepError } from "../record_step.ts";
import type { StepName } from "../step_table.ts";
import type { BatchJob, JobRun } from "./batch_jobs.ts";
import { jobTarget } from "./run_job.ts";

/** One step as its folder has it. */
export interface GatheredStep {
  /** The command. */
  readonly command: StepName;
  /** Done, failed, or not there: not begun, interrupted, or made from other inputs. */
  readonly status: "done" | "failed" | "missing";
  /** Its record; null when it is missing. */
  readonly record: StepRecord | null;
}

/** One treatment of a target as its folder has it. */
export interface GatheredRun {
  /** Name of the target. */
  readonly name: string;
  /** Title of the target; its name where it could not be read. */
  readonly title: string;
  /** Path of the target file from the manifest. */
  readonly path: string;
  /** Name of the variant; null for the target's own treatment. */
  readonly variant: string | null;
  /** Folder of the outputs, from the batch's. */
  readonly folder: string;
  /** The worst of its steps: failed before missing before done. */
  readonly status: "done" | "failed" | "missing";
  /** The first error; null when nothing failed. */
  readonly error: StepError | null;
  /** The steps asked for. */
  readonly steps: readonly GatheredStep[];
  /** Names of the lines. */
  readonly lines: readonly string[];
  /** Warnings of all steps. */
  readonly warnings: readonly Warning[];
  /** Names of the files of all steps that are done, in the run's folder. */
  readonly files: readonly string[];
}

/**
 * Finds what has become of a job, from its folders alone: whichever process or machine did it.
 *
 * @param job The job.
 * @param folder Folder of the batch.
 * @returns One entry a treatment.
 */
export async function gatherJob(job: BatchJob, folder: string): Promise<GatheredRun[]> {
  const runs: GatheredRun[] = [];
  for (const run of job.runs) runs.push(await gatherRun(job, { run, folder }));
  return runs;
}

async function gatherRun(
  job: BatchJob,
  options: { run: JobRun; folder: string },
): Promise<GatheredRun> {
  const { run } = options;
  const folder = join(options.folder, run.folder);
  const { name, path } = job;
  const { variant } = run;
  try {
    const target = await jobTarget(job, run);
    const { key } = openRecord(target, {
      inputs: await inputDigests(target),
      folder,
      force: job.force,
    });
    const known = (await readProvenance(folder))?.runs.find((entry) => entry.key === key)?.steps;
    const steps: GatheredStep[] = [];
    for (const command of run.commands) {
      const record = known?.find((step) => step.command === command) ?? null;
      const there = record !== null && await filesThere(folder, record);
      steps.push({
        command,
        status: there ? record.status : "missing",
        record: there ? record : null,
      });
    }
    const records = steps.flatMap(({ record }) => (record === null ? [] : [record]));
    const status = (["failed", "missing"] as const)
      .find((word) => steps.some((step) => step.status === word)) ?? "done";
    return {
      name,
      title: target.title,
      path,
      variant,
      folder: run.folder,
      status,
      error: records.find((record) => record.error !== null)?.error ?? null,
      steps,
      lines: target.settings.lines.map((line) => line.name),
      warnings: uniqueWarnings(records.flatMap((record) => record.warnings)),
      files: records.flatMap((record) => record.files.map(({ file }) => file)),
    };
  } catch (error) {
    return {
      name,
      title: name,
      path,
      variant,
      folder: run.folder,
      status: "failed",
      error: stepError(error, { base: dirname(job.file) }),
      steps: run.commands.map((command) => ({ command, status: "missing", record: null })),
      lines: [],
      warnings: [],
      files: [],
    };
  }
}

async function filesThere(folder: string, record: StepRecord): Promise<boolean> {
  for (const { file, bytes } of record.files) {
    try {
      if ((await Deno.stat(join(folder, file))).size !== bytes) return false;
    } catch {
      return false;
    }
  }
  return true;
}
