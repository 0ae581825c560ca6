import { join } from "@std/path";
import { type EcsvValue, formatEcsv } from "../../files/mod.ts";
import { VERSION } from "../version.ts";
import type { GatheredRun } from "./gather_job.ts";
import { summaryColumns, type SummarySource } from "./summary_columns.ts";

/** Rows of the summary, one value a column. */
export type SummaryRow = readonly EcsvValue[];

/**
 * The rows of one treatment of one target: one a line, or a single one where no line is known.
 *
 * @param run The treatment.
 * @param folder Folder of the batch.
 * @returns Rows in the order of the lines.
 */
export async function summaryRows(run: GatheredRun, folder: string): Promise<SummaryRow[]> {
  const documents: Record<string, unknown> = {};
  for (const { command, record } of run.steps) {
    const name = `${command}.json`;
    if (record?.status !== "done" || !record.files.some(({ file }) => file === name)) continue;
    const document = JSON.parse(await Deno.readTextFile(join(folder, run.folder, name)));
    delete document.warnings;
    documents[command] = document;
  }
  // A variant tells only of the lines that it has treated.
  const lines = run.lines.filter((line) => run.variant === null || isToldOf(documents, line));
  return (lines.length === 0 ? [null] : lines).map((line) => {
    const source: SummarySource = { run, line, documents };
    return summaryColumns.map(({ value }) => value(source));
  });
}

function isToldOf(documents: Readonly<Record<string, unknown>>, line: string): boolean {
  return Object.values(documents).some((document) =>
    Object.values(document as Record<string, unknown>).some((list) =>
      Array.isArray(list) &&
      list.some((entry) => (entry as { line?: string } | null)?.line === line)
    )
  );
}

/** `summary.ecsv`. */
export function summaryEcsv(title: string, rows: readonly SummaryRow[]): string {
  return formatEcsv({
    meta: { creator: "Millrace", version: VERSION, schema: "summary/1", title },
    columns: summaryColumns.map(({ value: _value, ...column }, i) => ({
      ...column,
      values: rows.map((row) => row[i] ?? null),
    })),
  });
}

/** First row of `summary.csv`: names of the columns. By it the file is known to be ours. */
export const SUMMARY_CSV_HEAD: string = summaryColumns.map(({ name }) => name).join(",");

/**
 * `summary.csv`: the same table without a header, for spreadsheets.
 *
 * @param rows The rows.
 * @returns Comma-separated text (RFC 4180 but for the line ends); missing values are empty.
 */
export function summaryCsv(rows: readonly SummaryRow[]): string {
  const cell = (value: EcsvValue | undefined) => {
    const text = value === null || value === undefined ? "" : String(value);
    return /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
  };
  return [SUMMARY_CSV_HEAD, ...rows.map((row) => row.map(cell).join(",")), ""].join("\n");
}

/** Whether a file is a summary that Millrace wrote: told by its first columns, whatever the version. */
export async function isSummaryCsv(path: string): Promise<boolean> {
  try {
    const head = summaryColumns.slice(0, 6).map(({ name }) => name).join(",");
    return (await Deno.readTextFile(path)).startsWith(`${head},`);
  } catch {
    return false;
  }
}
