import { globToRegExp, isAbsolute, isGlob, join } from "@std/path";
import { InputError } from "../errors.ts";

/** Options of {@linkcode expandGlob}. */
export interface GlobOptions {
  /**
   * Folder that a relative pattern starts from.
   * @default {"."}
   */
  readonly base?: string;
  /** File in which the pattern stands, for messages. */
  readonly file?: string;
  /** Key under which the pattern stands, for messages. */
  readonly key?: string;
}

async function isThere(path: string): Promise<boolean> {
  try {
    return (await Deno.stat(path)).isFile;
  } catch {
    return false;
  }
}

async function* walk(folder: string, prefix: string, depth: number): AsyncGenerator<string> {
  const entries: Deno.DirEntry[] = [];
  try {
    for await (const entry of Deno.readDir(folder)) entries.push(entry);
  } catch {
    return; // a folder that may not be listed holds no match
  }
  for (const { name, isDirectory, isSymlink } of entries) {
    const path = join(folder, name);
    // Links to files count; links to folders are not followed, for they can lead in a circle.
    if (isDirectory) {
      if (depth > 1) yield* walk(path, `${prefix}${name}/`, depth - 1);
    } else if (!isSymlink || await isThere(path)) yield `${prefix}${name}`;
  }
}

// Folders named outright are walked into directly; only what follows them is matched.
function splitPattern(pattern: string): { fixed: string; rest: string } {
  const parts = pattern.split("/");
  const first = parts.findIndex((part) => /[*?[{(\\]/.test(part));
  return { fixed: parts.slice(0, first).join("/"), rest: parts.slice(first).join("/") };
}

const hidden = (path: string) => path.split("/").some((part) => part.startsWith("."));

/**
 * Finds the files that a pattern names: `*`, `?`, `[a-z]`, `{a,b}` and `**` (any folders). A name
 * without these, or one that exists to the letter, is taken as it is. Hidden files need a pattern
 * that names the dot.
 *
 * @param pattern The pattern, with `/` between folders; relative to `base`.
 * @param options The base folder; where the pattern stands, for messages.
 * @returns Paths, `base` included, in the order of their code units (the same on every machine).
 * @throws {InputError} If no file matches.
 *
 * @example
 * ```ts
 * import { expandGlob } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const base = await Deno.makeTempDir();
 * for (const name of ["b2.fits", "b1.fits", "log.csv"]) {
 *   await Deno.writeTextFile(`${base}/${name}`, "");
 * }
 * assertEquals(await expandGlob("*.fits", { base }), [`${base}/b1.fits`, `${base}/b2.fits`]);
 * ```
 */
export async function expandGlob(pattern: string, options: GlobOptions = {}): Promise<string[]> {
  const { base = ".", file, key } = options;
  const fromBase = (path: string) => isAbsolute(path) ? path : join(base, path);
  if (pattern !== "" && await isThere(fromBase(pattern))) return [fromBase(pattern)];
  const found: string[] = [];
  if (isGlob(pattern)) {
    const { fixed, rest } = splitPattern(pattern);
    const folder = fixed === "" && pattern.startsWith("/") ? "/" : fromBase(fixed);
    const matcher = globToRegExp(rest, { extended: true, globstar: true });
    const depth = rest.includes("**") ? Infinity : rest.split("/").length;
    const dots = hidden(rest);
    for await (const path of walk(folder, "", depth)) {
      if (matcher.test(path) && (dots || !hidden(path))) found.push(join(folder, path));
    }
  }
  if (found.length === 0) {
    throw new InputError({
      action: "find files",
      rule: isGlob(pattern) ? "a pattern must match at least one file" : "the file must exist",
      value: pattern,
      file,
      key,
      remedy: `check the name; it is looked for from ${base === "." ? "this folder" : base}`,
    });
  }
  return found.sort((a, b) => a < b ? -1 : a > b ? 1 : 0);
}
