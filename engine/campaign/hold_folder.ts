import { join } from "@std/path";
import { makeFolder, withLock } from "../files/mod.ts";

/** Lock file of an output folder. */
export const FOLDER_LOCK = ".millrace.lock";
/** What a killed process leaves of a file that it was writing. */
const UNFINISHED = /^\.millrace-\d+-\d+\.part$/;

/**
 * Does something while no other run of Millrace may write into a folder. What a killed run left
 * there half-written is removed first.
 *
 * @typeParam T What the action gives.
 * @param folder The folder; made when missing.
 * @param action What to do.
 * @param options Who holds it.
 * @param options.owner For the message that a second run gets. @default "millrace"
 * @returns What the action gives.
 * @throws {WorkError} When another run is at work there, naming it.
 */
export async function holdFolder<T>(
  folder: string,
  action: () => Promise<T>,
  options: { owner?: string } = {},
): Promise<T> {
  const found = await isThere(folder);
  await makeFolder(folder);
  try {
    return await withLock(join(folder, FOLDER_LOCK), async () => {
      for await (const { name, isFile } of Deno.readDir(folder)) {
        if (isFile && UNFINISHED.test(name)) await Deno.remove(join(folder, name));
      }
      return await action();
    }, options);
  } finally {
    // A run that wrote nothing leaves nothing; a folder that holds something stays.
    if (!found) await Deno.remove(folder).catch(() => {});
  }
}

async function isThere(folder: string): Promise<boolean> {
  try {
    return (await Deno.stat(folder)).isDirectory;
  } catch {
    return false;
  }
}
