import { runTasks } from "../../workers/mod.ts";
import type { BatchJob } from "./batch_jobs.ts";
import type { JobOptions, JobOutcome, RunOutcome } from "./run_job.ts";
import { dearestFirst } from "./share_jobs.ts";

/** What the workers of a batch have in common. */
export type BatchShared = Pick<JobOptions, "folder" | "owner" | "overwrite">;

/**
 * Runs jobs on several workers, one treatment of one target at a time, the dearest target first.
 *
 * @param jobs The jobs.
 * @param options How.
 * @param options.costs Expected cost of each treatment of each job.
 * @param options.module Task module of the workers.
 * @param options.workers Number of workers.
 * @param options.onJob Told the number of each job whose treatments have all come to their end.
 * @param options.signal Ends the work.
 * @returns What became of each job.
 */
export async function runPieces(
  jobs: readonly BatchJob[],
  options: BatchShared & {
    costs: readonly (readonly number[])[];
    module: URL;
    workers: number;
    onJob: (index: number, outcome: JobOutcome) => void;
    signal?: AbortSignal;
  },
): Promise<JobOutcome[]> {
  const { costs, module, workers, folder, owner, overwrite, onJob, signal } = options;
  const pieces = dearestFirst(costs);
  const runs = jobs.map((): RunOutcome[] => []);
  const left = jobs.map((job) => job.runs.length);
  const outcomeOf = (index: number) => ({ name: jobs[index]!.name, runs: runs[index]! });
  await runTasks<BatchJob, JobOutcome, BatchShared>(
    pieces.map(({ job, run }) => ({ ...jobs[job]!, runs: [jobs[job]!.runs[run]!] })),
    {
      module,
      workers,
      shared: { folder, owner, overwrite },
      onResult(piece, outcome) {
        const { job, run } = pieces[piece]!;
        runs[job]![run] = outcome.runs[0]!;
        if (--left[job]! === 0) onJob(job, outcomeOf(job));
      },
      signal,
    },
  );
  return jobs.map((_, index) => outcomeOf(index));
}
