import { isGlob } from "@std/path";
import { InputError } from "../errors.ts";
import { expandGlob, writtenByMillrace } from "../files/mod.ts";
import type { Target } from "./target.ts";

/** Of a file so much is read that its head shows what it is. */
const HEAD_BYTES = 4096;
/** The card that results have and exposures do not, even simulated ones: see `fitsHead`. */
const SETTINGS = /^SETTINGS=/;

/**
 * Files of exposures that a pattern names. Results of Millrace that stand among them, as when the
 * output folder is that of the exposures, are left out: a second run finds the exposures that the
 * first one found.
 *
 * @param target The target, whose folder the pattern starts from.
 * @param options What is looked for.
 * @param options.pattern Path or glob.
 * @param options.key Key of the target file under which it stands, for messages.
 * @returns Paths that can be opened, in order.
 * @throws {InputError} When nothing is found, or a path names a result; with file, line and key.
 */
export async function exposureFiles(
  target: Pick<Target, "file" | "folder" | "places">,
  options: { pattern: string; key: string },
): Promise<string[]> {
  const { pattern, key } = options;
  const place = { file: target.file, line: target.places.get(key)?.line, key };
  let found: string[];
  try {
    found = await expandGlob(pattern, { base: target.folder, key });
  } catch (error) {
    throw error instanceof InputError ? error.at(place) : error;
  }
  const kept = await withoutResults(found);
  if (kept.length > 0) return kept;
  throw new InputError({
    action: "read exposures",
    rule: isGlob(pattern)
      ? "a pattern must match a file that is no result of Millrace"
      : "an exposure must not be a result of Millrace",
    value: pattern,
    ...place,
    remedy: "name the files of the exposures",
  });
}

/**
 * Files that are no results of Millrace.
 *
 * @param paths Paths.
 * @returns Those that are none, in the same order.
 */
export async function withoutResults(paths: readonly string[]): Promise<string[]> {
  const kept: string[] = [];
  for (const path of paths) {
    if (!await isResult(path)) kept.push(path);
  }
  return kept;
}

async function isResult(path: string): Promise<boolean> {
  const head = await headOf(path);
  if (head === null || !writtenByMillrace(head)) return false;
  const text = new TextDecoder("latin1").decode(head);
  if (text.startsWith("SIMPLE  =")) {
    return Array.from({ length: HEAD_BYTES / 80 }, (_, k) => text.slice(80 * k, 80 * k + 80))
      .some((card) => SETTINGS.test(card));
  }
  // Simulated exposures in text, and their log, begin with a comment; captions do not.
  return text.startsWith("# %ECSV") || !text.startsWith("#");
}

// A file that cannot be opened is told of where it is read.
async function headOf(path: string): Promise<Uint8Array | null> {
  try {
    using file = await Deno.open(path);
    const head = new Uint8Array(HEAD_BYTES);
    const read = await file.read(head);
    return head.subarray(0, read ?? 0);
  } catch {
    return null;
  }
}
