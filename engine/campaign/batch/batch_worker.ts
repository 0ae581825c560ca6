// Task module of the worker pool: one target of a batch, without a clock.
import type { BatchJob } from "./batch_jobs.ts";
import { type JobOptions, type JobOutcome, runJob } from "./run_job.ts";

/** Does all that is to be done to one target. */
export function runTask(
  job: BatchJob,
  shared: Pick<JobOptions, "folder" | "owner" | "overwrite">,
): Promise<JobOutcome> {
  return runJob(job, shared);
}
