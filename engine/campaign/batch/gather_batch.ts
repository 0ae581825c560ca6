import { basename, join, relative } from "@std/path";
import { checkReplaceable, makeFolder, writeFileAtomically } from "../../files/mod.ts";
import { holdFolder } from "../hold_folder.ts";
import { jsonText } from "../output_head.ts";
import type { Clock } from "../record_step.ts";
import { VERSION } from "../version.ts";
import type { BatchJob } from "./batch_jobs.ts";
import type { GatheredRun } from "./gather_job.ts";
import { type GatheredRows, gatherRows } from "./gather_rows.ts";
import { clearParts } from "./hold_part.ts";
import { indexPage } from "./index_page.ts";
import type { Manifest } from "./manifest.ts";
import { samplePlates } from "./sample_plates.ts";
import { isSummaryCsv, summaryCsv, summaryEcsv, type SummaryRow } from "./summary_tables.ts";
import { stepError } from "../record_step.ts";
import type { StepError } from "../provenance.ts";

/** How the work was done, where it was done in this process. */
export interface BatchCost {
  /** Workers. */
  readonly workers: number;
  /** Start, ISO 8601 in UTC; null when no clock was at hand. */
  readonly started: string | null;
  /** Highest resident memory of the process seen at work, bytes. */
  readonly peak_memory_bytes: number;
}

/** `batch.json`. */
export interface BatchDocument {
  /** Name and version of the document's keys. */
  readonly schema: "batch/1";
  /** Version of Millrace. */
  readonly version: string;
  /** Title of the manifest. */
  readonly title: string;
  /** How the work was done; null where other processes did it. */
  readonly cost: BatchCost | null;
  /** End, ISO 8601 in UTC; null when no clock was at hand. */
  readonly ended: string | null;
  /** Number of targets. */
  readonly target_count: number;
  /** Names of targets that failed. */
  readonly failed: readonly string[];
  /** Names of targets of which something was not made or has to be made again. */
  readonly missing: readonly string[];
  /** Sample plates that could not be drawn. */
  readonly plate_errors: readonly (StepError & { readonly plate: string })[];
  /** Tables, page and sample plates, in the folder of the batch. */
  readonly files: readonly string[];
  /** One entry a target and treatment. */
  readonly runs: readonly BatchRun[];
}

/** One treatment of a target in `batch.json`. */
export interface BatchRun extends Omit<GatheredRun, "steps" | "files"> {
  /** The steps, with their times. */
  readonly steps: readonly {
    /** The command. */
    readonly command: string;
    /** What became of it. */
    readonly status: string;
    /** Start; null when it is missing or no clock was at hand. */
    readonly started: string | null;
    /** End, likewise. */
    readonly ended: string | null;
  }[];
}

/** What a batch comes to. */
export interface BatchResult {
  /** `batch.json`. */
  readonly document: BatchDocument;
  /** Paths of the tables, the page and the sample plates. */
  readonly files: readonly string[];
}

/**
 * Joins what the targets' folders hold into the tables, the page and the sample plates, whichever
 * process or machine made it. The same folders give the same bytes, `batch.json` with its times aside.
 *
 * @param manifest The manifest.
 * @param options Of what, and where.
 * @param options.jobs What the manifest asks for.
 * @param options.folder Folder of the batch.
 * @param options.gathered What is known of targets by their names. @default Nothing: their folders are read
 * @param options.overwrite Whether files that Millrace did not write may be replaced. @default false
 * @param options.cost How the work was done. @default null
 * @param options.owner Who gathers, for the message that another run gets. @default "millrace"
 * @param options.now The clock.
 * @param options.signal Aborts the work.
 * @returns Document and files.
 */
export async function gatherBatch(
  manifest: Manifest,
  options: {
    jobs: readonly BatchJob[];
    folder: string;
    gathered?: ReadonlyMap<string, Promise<GatheredRows>>;
    overwrite?: boolean;
    cost?: BatchCost | null;
    owner?: string;
    now?: Clock;
    signal?: AbortSignal;
  },
): Promise<BatchResult> {
  const { jobs, folder, gathered, overwrite, cost = null, owner, now, signal } = options;
  await makeFolder(folder);
  const runs: GatheredRun[] = [];
  const rows: (readonly SummaryRow[])[] = [];
  for (const job of jobs) {
    signal?.throwIfAborted();
    const found = await (gathered?.get(job.name) ?? gatherRows(job, folder));
    runs.push(...found.runs);
    rows.push(...found.rows);
  }
  return holdFolder(folder, async () => {
    const files: string[] = [];
    const write = async (name: string, data: Uint8Array | string, ours = false) => {
      const path = join(folder, name);
      await writeFileAtomically(path, data, { overwrite: overwrite || ours });
      files.push(path);
    };
    const all = rows.flat();
    await write("summary.ecsv", summaryEcsv(manifest.title, all));
    await write("summary.csv", summaryCsv(all), await isSummaryCsv(join(folder, "summary.csv")));
    const sample_files: string[] = [];
    const plate_errors: (StepError & { plate: string })[] = [];
    for (const plate of manifest.settings.sample_plates) {
      try {
        for await (const { name, data } of samplePlates(plate, { jobs, runs, folder })) {
          signal?.throwIfAborted();
          await write(name, data);
          sample_files.push(name);
        }
      } catch (error) {
        signal?.throwIfAborted();
        plate_errors.push({ plate: plate.name, ...stepError(error) });
      }
    }
    const { title } = manifest;
    await write("index.html", await indexPage({ title, runs, rows, sample_files }));
    const names = files.map((path) => relative(folder, path));
    await removeOld(folder, names);
    const document = batchDocument(manifest, {
      runs,
      files: names,
      plate_errors,
      cost,
      ended: now?.() ?? null,
    });
    await write("batch.json", jsonText(document));
    await clearParts(folder);
    return { document, files };
  }, { owner });
}

/** Removes sample plates of an earlier manifest that the new one does not ask for. */
async function removeOld(folder: string, names: readonly string[]): Promise<void> {
  let old: Partial<BatchDocument> | null = null;
  try {
    old = JSON.parse(await Deno.readTextFile(join(folder, "batch.json")));
  } catch {
    // There was none.
  }
  for (const name of old?.schema === "batch/1" ? old.files ?? [] : []) {
    if (names.includes(name) || name !== basename(name)) continue;
    const path = join(folder, name);
    await checkReplaceable(path);
    await Deno.remove(path).catch(() => {});
  }
}

function batchDocument(
  manifest: Manifest,
  options: {
    runs: readonly GatheredRun[];
    files: readonly string[];
    plate_errors: BatchDocument["plate_errors"];
    cost: BatchCost | null;
    ended: string | null;
  },
): BatchDocument {
  const { runs, files, plate_errors, cost, ended } = options;
  const named = (status: GatheredRun["status"]) => [
    ...new Set(runs.filter((run) => run.status === status).map(({ name }) => name)),
  ];
  return {
    schema: "batch/1",
    version: VERSION,
    title: manifest.title,
    cost,
    ended,
    target_count: manifest.targets.length,
    failed: named("failed"),
    missing: named("missing"),
    plate_errors,
    files,
    runs: runs.map(({ steps, files: _files, ...run }) => ({
      ...run,
      steps: steps.map(({ command, status, record }) => ({
        command,
        status,
        started: record?.started ?? null,
        ended: record?.ended ?? null,
      })),
    })),
  };
}
