import { WorkError } from "../errors.ts";
import { systemReason } from "./system_reason.ts";

/** Options of {@linkcode withLock}. */
export interface LockOptions {
  /**
   * What holds the lock, for the message that a second holder gets, as in "millrace map star.toml".
   * @default {"millrace"}
   */
  readonly owner?: string;
  /** Told the owner's name when a lock was found that its owner left behind when it was killed. */
  readonly onStale?: (owner: string) => void;
}

const decoder = new TextDecoder();

async function ownerOf(path: string): Promise<string> {
  try {
    const text = decoder.decode(await Deno.readFile(path)).trim();
    return text === "" ? "an unnamed process" : text.slice(0, 200);
  } catch {
    return "an unnamed process";
  }
}

// The file may have been removed by its owner between our opening and our locking it: then the
// lock is on a file that has no name any more, and the next comer would not meet it.
async function stillNamed(path: string, file: Deno.FsFile): Promise<boolean> {
  try {
    const [named, held] = await Promise.all([Deno.stat(path), file.stat()]);
    return named.ino === held.ino && named.dev === held.dev;
  } catch {
    return false;
  }
}

async function take(path: string): Promise<{ file: Deno.FsFile; left: string | undefined }> {
  for (;;) {
    const file = await Deno.open(path, { read: true, write: true, create: true });
    let keep = false;
    try {
      if (!await file.tryLock(true)) {
        throw new WorkError({
          action: "start",
          reason: `another run is at work there: ${await ownerOf(path)}`,
          file: path,
          remedy: "wait until it has ended, or choose another output folder",
        });
      }
      if (await stillNamed(path, file)) {
        const { size } = await file.stat();
        keep = true;
        return { file, left: size > 0 ? await ownerOf(path) : undefined };
      }
    } finally {
      if (!keep) file.close();
    }
  }
}

/**
 * Does something while holding a lock file, which is removed afterwards. The lock is the operating
 * system's own on the open file, so it ends with the process however that ends: a file left behind
 * by a killed run is recognised, reported through `onStale`, and taken over. The file names its
 * owner for the message that a second holder gets.
 *
 * @typeParam T What the action gives.
 * @param path The lock file, in a folder that exists.
 * @param action What to do.
 * @param options The owner's name; who is told about a lock left behind.
 * @returns What the action gives.
 * @throws {WorkError} If another holds the lock, naming it, or the lock file cannot be made.
 *
 * @example
 * ```ts
 * import { withLock } from "@millrace/millrace/files";
 * import { WorkError } from "@millrace/millrace/errors";
 * import { assertEquals, assertRejects } from "@std/assert";
 *
 * const path = `${await Deno.makeTempDir()}/.lock`;
 * const result = await withLock(path, async () => {
 *   await assertRejects(() => withLock(path, () => 0), WorkError, "first run");
 *   return 42;
 * }, { owner: "first run" });
 * assertEquals(result, 42);
 * ```
 */
export async function withLock<T>(
  path: string,
  action: () => Promise<T> | T,
  options: LockOptions = {},
): Promise<T> {
  const { owner = "millrace", onStale } = options;
  let taken: Awaited<ReturnType<typeof take>>;
  try {
    taken = await take(path);
    await taken.file.truncate(0);
    await taken.file.write(new TextEncoder().encode(`${owner} (process ${Deno.pid})\n`));
  } catch (error) {
    if (error instanceof WorkError) throw error;
    throw new WorkError({
      action: "start",
      reason: systemReason(error),
      file: path,
      remedy: "mend the folder's permissions, or choose another output folder",
    });
  }
  const { file, left } = taken;
  try {
    if (left !== undefined) onStale?.(left);
    return await action();
  } finally {
    await Deno.remove(path).catch(() => {});
    file.close();
  }
}
