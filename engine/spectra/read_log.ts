import { InputError } from "../errors.ts";
import { type CsvTable, parseCsv } from "../files/mod.ts";
import { type Facts, namedFacts } from "./facts.ts";

function baseName(path: string): string {
  return path.replace(/^.*[\\/]/, "");
}

/**
 * Reads the log of text spectra: a CSV file with one row an exposure, its file named in one column.
 *
 * @param text The log.
 * @param options The log's name, for messages; names of columns by what they hold (`file`).
 * @returns A function that gives the facts of a spectrum's file, and one that names the files of the
 * log that were never asked for.
 * @throws {InputError} When the log has no column of files, or names one twice; the function when a
 * file is not in the log.
 *
 * @example
 * ```ts
 * import { readLog } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const log = readLog("file,mid,exposure_s\na.txt,2460311.5,60\n", { file: "log.csv" });
 * assertEquals(log.factsOf("night1/a.txt").find("exposure_s")?.text, "60");
 * ```
 */
export function readLog(
  text: string,
  options: { readonly file: string; readonly keys?: Readonly<Record<string, string>> },
): { readonly factsOf: (path: string) => Facts; readonly unused: () => readonly string[] } {
  const { file, keys = {} } = options;
  const table: CsvTable = parseCsv(text, { file, action: "read log of spectra" });
  const wanted = keys["file"] ?? "file";
  const at = table.names.findIndex((name) => name.toUpperCase() === wanted.toUpperCase());
  if (at < 0) {
    throw new InputError({
      action: "read log of spectra",
      rule: `a column must name the files; the columns are ${table.names.join(", ")}`,
      value: wanted,
      file,
      key: "keys.file",
    });
  }
  const rows = new Map<string, Facts>();
  for (const { cells, line } of table.rows) {
    const name = baseName(cells[at]!);
    if (rows.has(name)) {
      throw new InputError({
        action: "read log of spectra",
        rule: "a file must come once",
        value: name,
        file,
        line,
      });
    }
    // "mid_bjd_tdb" is a mid-exposure, and its own name says place and scale.
    const entries = table.names.flatMap((column, k): [string, string][] => [[column, cells[k]!]]);
    rows.set(name, withMarkedNames(entries, { file, line }));
  }
  const asked = new Set<string>();
  return {
    factsOf(path) {
      const name = baseName(path);
      const facts = rows.get(name);
      asked.add(name);
      if (facts === undefined) {
        throw new InputError({
          action: "read log of spectra",
          rule: "every file must have a row in the log",
          value: name,
          file,
          key: wanted,
        });
      }
      return facts;
    },
    unused: () => [...rows.keys()].filter((name) => !asked.has(name)),
  };
}

function withMarkedNames(
  entries: readonly (readonly [string, string])[],
  place: { readonly file: string; readonly line: number },
): Facts {
  const plain = namedFacts(entries, place);
  return {
    find(key) {
      const exact = plain.find(key);
      if (exact !== undefined || !/^(mid|start|end)$/.test(key)) return exact;
      // "mid (BJD)" or "mid [HJD, UTC]" as well.
      const longer = entries.find(([name]) => new RegExp(`^${key}[_\\s([]`, "i").test(name.trim()));
      return longer === undefined ? undefined : plain.find(longer[0]);
    },
    names: plain.names,
  };
}
