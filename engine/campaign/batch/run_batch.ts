import { join } from "@std/path";
import type { Progress } from "../../workers/mod.ts";
import { FOLDER_LOCK, holdFolder } from "../hold_folder.ts";
import type { Clock } from "../record_step.ts";
import { type BatchJob, batchJobs, expectedCosts } from "./batch_jobs.ts";
import { type BatchCost, type BatchResult, gatherBatch } from "./gather_batch.ts";
import { type GatheredRows, gatherRows } from "./gather_rows.ts";
import { holdPart } from "./hold_part.ts";
import type { Manifest } from "./manifest.ts";
import { type JobOutcome, runJob } from "./run_job.ts";
import { runPieces } from "./run_pieces.ts";
import { type Part, shareByCost } from "./share_jobs.ts";

/** News of a batch at work: one target has come to its end. */
export interface BatchNews {
  /** What became of it. */
  readonly outcome: JobOutcome;
  /** Targets that have come to their end. */
  readonly done: number;
  /** Targets in all. */
  readonly total: number;
  /** Expected cost of what is done over that of all. */
  readonly done_fraction: number;
}

/** How a batch is run. */
export interface BatchOptions {
  /** Folder of the outputs. */
  readonly folder: string;
  /** Number of workers, each with one treatment of one target at a time. @default {1} */
  readonly workers?: number;
  /** The share to be done; tables are then left to `gatherBatch`. @default All */
  readonly part?: Part;
  /** Overrides for all targets, after those of the manifest. @default {[]} */
  readonly set?: readonly string[];
  /** Seed in place of the target files'. @default None */
  readonly seed?: number;
  /** Whether maps are made in spite of a large gap in phase. @default {false} */
  readonly force?: boolean;
  /** Whether files that Millrace did not write may be replaced. @default {false} */
  readonly overwrite?: boolean;
  /** Who runs it, for the message that another run gets. @default {"millrace batch"} */
  readonly owner?: string;
  /** The clock of this thread. @default None: times are not recorded */
  readonly now?: Clock;
  /** Task module with a clock for the other threads. @default One without */
  readonly module?: URL;
  /** Told as each target comes to its end. @default None */
  readonly onTarget?: (news: BatchNews) => void;
  /** Told how far the work on a target has come, with one worker. @default None */
  readonly progress?: Progress;
  /** Aborts the work. @default None */
  readonly signal?: AbortSignal;
}

/** What was done by one call of {@linkcode runBatch}. */
export interface BatchReport {
  /** One entry a target of the share, in order of names. */
  readonly outcomes: readonly JobOutcome[];
  /** Tables and page; null when only a share was done. */
  readonly result: BatchResult | null;
  /** How the work was done. */
  readonly cost: BatchCost;
}

/** Between two looks at the memory, ms. */
const LOOK_MS = 200;

/**
 * Runs a batch, or one share of it: each treatment of a target on a worker, one at a time; with several
 * workers those of the target that is expected to take longest first. A target that fails does not
 * stop the others; what an earlier run has done is kept.
 *
 * @param manifest The manifest.
 * @param options Where and how.
 * @returns What became of the targets, and the tables where all was done.
 * @throws {WorkError} When another run is at work in the folder, or the tables cannot be written.
 */
export function runBatch(manifest: Manifest, options: BatchOptions): Promise<BatchReport> {
  const { folder, part, set, seed, force, owner = "millrace batch", now, signal } = options;
  return holdPart(folder, async () => {
    const jobs = batchJobs(manifest, { set, seed, force });
    const costs: number[][] = [];
    for (const job of jobs) costs.push(await expectedCosts(job));
    const share = part === undefined ? null : shareByCost(costs.map(sum), part.count);
    const mine = jobs.map((_, i) => i).filter((i) => share === null || share[i] === part!.index);
    const started = now?.() ?? null;
    const memory = watchMemory();
    // While other targets are at work: at the end one thread alone would do it for all.
    const gathered = new Map<string, Promise<GatheredRows>>();
    const gather = (job: BatchJob) => {
      const rows = gatherRows(job, folder);
      rows.catch(() => {}); // told when it is its turn
      gathered.set(job.name, rows);
    };
    try {
      const outcomes = await runJobs(mine.map((i) => jobs[i]!), {
        ...options,
        owner,
        costs: mine.map((i) => costs[i]!),
        onJob: part === undefined ? gather : undefined,
      });
      const cost = { workers: options.workers ?? 1, started, peak_memory_bytes: memory.peak() };
      const result = part === undefined
        ? await gatherBatch(manifest, { ...options, jobs, gathered, cost, owner })
        : null;
      return { outcomes, result, cost };
    } catch (error) {
      if (signal?.aborted) await clearFolders(mine.map((i) => jobs[i]!), folder);
      throw error;
    } finally {
      memory.stop();
    }
  }, { part: part ?? { index: 1, count: 1 }, owner });
}

async function runJobs(
  jobs: readonly BatchJob[],
  options: BatchOptions & {
    owner: string;
    costs: readonly (readonly number[])[];
    onJob?: (job: BatchJob) => void;
  },
): Promise<JobOutcome[]> {
  const { workers = 1, module, onTarget, onJob, costs } = options;
  const total = sum(costs.flat());
  let done = 0;
  let spent = 0;
  const told = (index: number, outcome: JobOutcome) => {
    spent += sum(costs[index]!);
    onJob?.(jobs[index]!);
    onTarget?.({ outcome, done: ++done, total: jobs.length, done_fraction: spent / total });
  };
  if (workers > 1) {
    return runPieces(jobs, {
      ...options,
      module: module ?? new URL("./batch_worker.ts", import.meta.url),
      workers,
      onJob: told,
    });
  }
  // On this thread an interrupt is heard within a target, and progress is seen.
  const outcomes: JobOutcome[] = [];
  for (const [index, job] of jobs.entries()) {
    const outcome = await runJob(job, options);
    outcomes.push(outcome);
    told(index, outcome);
  }
  return outcomes;
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}

/** Removes what workers that were ended at once have left: locks and half-written files. */
async function clearFolders(jobs: readonly BatchJob[], folder: string): Promise<void> {
  for (const { runs } of jobs) {
    for (const run of runs) await clearFolder(join(folder, run.folder));
  }
}

/** A worker that was ended holds its lock for a moment more; another process may hold it for long. */
async function clearFolder(folder: string): Promise<void> {
  for (let attempt = 0; attempt < 50; attempt++) {
    try {
      await Deno.stat(join(folder, FOLDER_LOCK));
    } catch {
      return;
    }
    try {
      await holdFolder(folder, () => Promise.resolve());
      return;
    } catch {
      await new Promise((resolve) => setTimeout(resolve, 20));
    }
  }
}

function watchMemory(): { peak: () => number; stop: () => void } {
  let peak = 0;
  const look = () => {
    peak = Math.max(peak, Deno.memoryUsage().rss);
  };
  look();
  const timer = setInterval(look, LOOK_MS);
  return {
    peak: () => {
      look();
      return peak;
    },
    stop: () => clearInterval(timer),
  };
}
