// Task module of the worker pool: one target of a batch, with the clock that the engine lacks.
import { type BatchJob, type JobOptions, type JobOutcome, runJob } from "../engine/campaign/mod.ts";
import { utcNow } from "./clock.ts";

/** Does all that is to be done to one target. */
export function runTask(
  job: BatchJob,
  shared: Pick<JobOptions, "folder" | "owner" | "overwrite">,
): Promise<JobOutcome> {
  return runJob(job, { ...shared, now: utcNow });
}
