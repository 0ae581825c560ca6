import { join } from "@std/path";
import { WorkError } from "../../errors.ts";
import { makeFolder, withLock } from "../../files/mod.ts";
import type { Part } from "./share_jobs.ts";

const LOCKS = /^\.millrace-part-\d+-of-(\d+)\.lock$/;

/**
 * Does something while no other process does the same part of a batch, nor a part of another
 * division of it.
 *
 * @typeParam T What the action gives.
 * @param folder Folder of the batch; made when missing.
 * @param action What to do.
 * @param options Which part, and who holds it.
 * @returns What the action gives.
 * @throws {WorkError} When another run is at work there, naming it.
 */
export async function holdPart<T>(
  folder: string,
  action: () => Promise<T>,
  options: { part: Part; owner: string },
): Promise<T> {
  const { part: { index, count }, owner } = options;
  await makeFolder(folder);
  return withLock(join(folder, `.millrace-part-${index}-of-${count}.lock`), async () => {
    for await (const { name } of Deno.readDir(folder)) {
      const others = LOCKS.exec(name);
      // Taking the lock of another division proves that nobody holds it, and removes what was left.
      if (others !== null && Number(others[1]) !== count) {
        await withLock(join(folder, name), () => {}, { owner });
      }
    }
    return await action();
  }, { owner });
}

/** Removes the locks of parts that were killed; those that are held stay. */
export async function clearParts(folder: string): Promise<void> {
  for await (const { name } of Deno.readDir(folder)) {
    if (!LOCKS.test(name)) continue;
    try {
      await withLock(join(folder, name), () => {});
    } catch (error) {
      if (!(error instanceof WorkError)) throw error;
    }
  }
}
