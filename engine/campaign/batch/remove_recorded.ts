import { join } from "@std/path";
import { sha256 } from "../../files/mod.ts";
import type { StepRecord } from "../provenance.ts";

/**
 * Removes the files of a step, but for those that somebody has changed since.
 *
 * @param folder Where they are.
 * @param step The step's record.
 */
export async function removeRecorded(folder: string, step: StepRecord): Promise<void> {
  for (const { file, sha256: digest } of step.files) {
    const path = join(folder, file);
    try {
      if (sha256(await Deno.readFile(path)) === digest) await Deno.remove(path);
    } catch (error) {
      if (!(error instanceof Deno.errors.NotFound)) throw error;
    }
  }
}
