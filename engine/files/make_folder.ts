import { WorkError } from "../errors.ts";
import { systemReason } from "./system_reason.ts";

/**
 * Makes a folder and those above it; one that exists already is left as it is.
 *
 * @param path The folder.
 * @throws {WorkError} If it cannot be made, naming it and the reason.
 *
 * @example
 * ```ts
 * import { makeFolder } from "@millrace/millrace/files";
 * import { assert } from "@std/assert";
 *
 * const path = `${await Deno.makeTempDir()}/campaign/night1`;
 * await makeFolder(path);
 * assert((await Deno.stat(path)).isDirectory);
 * ```
 */
export async function makeFolder(path: string): Promise<void> {
  try {
    await Deno.mkdir(path, { recursive: true });
  } catch (error) {
    throw new WorkError({
      action: "make folder",
      reason: error instanceof Deno.errors.AlreadyExists
        ? "a file of that name is in the way"
        : systemReason(error),
      file: path,
      remedy: "choose another output folder",
    });
  }
}
