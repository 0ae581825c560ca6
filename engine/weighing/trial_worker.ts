// Task module of the worker pool: trials of a pair.
import { runTrials, type TrialJob } from "./pair_trials.ts";

/** Statistics of a stretch of trials. */
export function runTask(
  task: { readonly from: number; readonly to: number },
  job: TrialJob,
): Float64Array {
  return runTrials(job, task);
}
