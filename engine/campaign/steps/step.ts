import { join } from "@std/path";
import { checkReplaceable, makeFolder, writeFileAtomically } from "../../files/mod.ts";
import type { Warning } from "../../errors.ts";

/** Where and how a step writes. */
export interface StepOutput {
  /** Folder for the outputs; made when missing. */
  readonly folder: string;
  /** Whether files that Millrace did not write may be replaced. @default {false} */
  readonly overwrite?: boolean;
}

/** What a step hands back. */
export interface StepResult<T> {
  /** The JSON document. */
  readonly document: T;
  /** Files written, in order. */
  readonly files: readonly string[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Writes the files of a step, all or none begun: the folder is made first.
 *
 * @param files Names and contents.
 * @param output Where and how.
 * @returns Paths written.
 * @throws {InputError} When a file exists that Millrace did not write.
 * @throws {WorkError} When the folder cannot be written.
 */
export async function writeStep(
  files: readonly (readonly [name: string, data: Uint8Array | string])[],
  output: StepOutput,
): Promise<string[]> {
  await makeFolder(output.folder);
  // A refusal must come before the first file, not between two of them.
  for (const [name] of files) {
    await checkReplaceable(join(output.folder, name), { overwrite: output.overwrite });
  }
  const paths: string[] = [];
  for (const [name, data] of files) {
    const path = join(output.folder, name);
    await writeFileAtomically(path, data, { overwrite: output.overwrite });
    paths.push(path);
  }
  return paths;
}
