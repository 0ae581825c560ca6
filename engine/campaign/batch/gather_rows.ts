import type { BatchJob } from "./batch_jobs.ts";
import { type GatheredRun, gatherJob } from "./gather_job.ts";
import { type SummaryRow, summaryRows } from "./summary_tables.ts";

/** What tables and page tell of one target. */
export interface GatheredRows {
  /** One entry a treatment. */
  readonly runs: readonly GatheredRun[];
  /** Rows of the summary of each treatment. */
  readonly rows: readonly (readonly SummaryRow[])[];
}

/**
 * Finds what has become of a job, with its rows of the summary.
 *
 * @param job The job.
 * @param folder Folder of the batch.
 * @returns Treatments and rows.
 */
export async function gatherRows(job: BatchJob, folder: string): Promise<GatheredRows> {
  const runs = await gatherJob(job, folder);
  const rows: SummaryRow[][] = [];
  for (const run of runs) rows.push(await summaryRows(run, folder));
  return { runs, rows };
}
