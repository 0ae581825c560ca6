import { InputError } from "../errors.ts";
import { systemReason } from "./system_reason.ts";
import { writtenByMillrace } from "./written_by_millrace.ts";

/** Options of {@linkcode checkReplaceable}. */
export interface ReplaceOptions {
  /**
   * Whether a file that Millrace did not write may be replaced.
   * @default {false}
   */
  readonly overwrite?: boolean;
}

// Beyond this size only the beginning is looked at: enough for the mark of FITS, ECSV and text.
const WHOLE_BYTES = 2 ** 26;
const HEAD_BYTES = 2 ** 20;

async function beginning(path: string, size: number): Promise<Uint8Array> {
  if (size <= WHOLE_BYTES) return await Deno.readFile(path);
  using file = await Deno.open(path);
  const head = new Uint8Array(HEAD_BYTES);
  const read = await file.read(head);
  return head.subarray(0, read ?? 0);
}

/**
 * Refuses a place for output that is taken by something else: a folder, a device, or a file that
 * Millrace did not write. A long computation calls this first, so that it does not end in a
 * refusal; {@linkcode writeFileAtomically} calls it again.
 *
 * @param path The place.
 * @param options Whether another's file may be replaced.
 * @throws {InputError} If the place is taken.
 *
 * @example
 * ```ts
 * import { checkReplaceable } from "@millrace/millrace/files";
 * import { InputError } from "@millrace/millrace/errors";
 * import { assertRejects } from "@std/assert";
 *
 * const path = `${await Deno.makeTempDir()}/notes.txt`;
 * await checkReplaceable(path); // nothing there
 * await Deno.writeTextFile(path, "my notes");
 * await assertRejects(() => checkReplaceable(path), InputError, "Millrace did not write");
 * await checkReplaceable(path, { overwrite: true });
 * ```
 */
export async function checkReplaceable(path: string, options: ReplaceOptions = {}): Promise<void> {
  const { overwrite = false } = options;
  const refuse = (rule: string, remedy: string) =>
    new InputError({ action: "write file", rule, file: path, remedy });
  let info: Deno.FileInfo;
  try {
    info = await Deno.stat(path);
  } catch {
    return; // nothing there, or a fault that the writing itself will name
  }
  if (!info.isFile) {
    const what = info.isDirectory ? "a folder" : "not an ordinary file";
    throw refuse(`the place is taken by ${what}`, "choose another output folder");
  }
  if (overwrite) return;
  let bytes: Uint8Array;
  try {
    bytes = await beginning(path, info.size);
  } catch (error) {
    throw refuse(
      `it cannot be seen whether Millrace wrote what is there (${systemReason(error)})`,
      "choose another output folder, or allow overwriting with --overwrite",
    );
  }
  if (!writtenByMillrace(bytes)) {
    throw refuse(
      "a file that Millrace did not write is never replaced unasked",
      "choose another output folder, or allow overwriting with --overwrite",
    );
  }
}
