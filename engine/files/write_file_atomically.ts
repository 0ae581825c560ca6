import { dirname, join } from "@std/path";
import { WorkError } from "../errors.ts";
import { checkReplaceable } from "./check_replaceable.ts";
import type { ReplaceOptions } from "./check_replaceable.ts";
import { systemReason } from "./system_reason.ts";

let count = 0;

// A short name of its own, so that a long final name stays within the file system's limit.
async function openTemporary(folder: string): Promise<{ path: string; file: Deno.FsFile }> {
  for (;;) {
    const path = join(folder, `.millrace-${Deno.pid}-${count++}.part`);
    try {
      return { path, file: await Deno.open(path, { write: true, createNew: true }) };
    } catch (error) {
      if (!(error instanceof Deno.errors.AlreadyExists)) throw error;
    }
  }
}

async function writeWhole(file: Deno.FsFile, bytes: Uint8Array): Promise<void> {
  try {
    for (let done = 0; done < bytes.length;) done += await file.write(bytes.subarray(done));
    // Without this a power cut after the rename could leave an empty file under the final name.
    await file.sync();
  } finally {
    file.close();
  }
}

// A symbolic link keeps pointing where it did: what it points to is replaced.
async function destination(path: string): Promise<string> {
  try {
    return await Deno.realPath(path);
  } catch {
    return path;
  }
}

/**
 * Writes a file so that a half-written one never bears its final name: the bytes go to a temporary
 * name in the same folder, reach the disc, and then the file is renamed. When anything fails the
 * temporary file is removed and what was there before stays as it was.
 *
 * @param path The file's final name.
 * @param data The bytes, or a text, which is written as UTF-8.
 * @param options Whether a file that Millrace did not write may be replaced.
 * @throws {InputError} If the place is taken by a folder or by a file that Millrace did not write.
 * @throws {WorkError} If the disc is full, the folder does not exist or may not be written to.
 *
 * @example
 * ```ts
 * import { readText, writeFileAtomically } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const path = `${await Deno.makeTempDir()}/map.json`;
 * await writeFileAtomically(path, '{"schema": "map/1", "version": "0.1.0"}');
 * await writeFileAtomically(path, '{"schema": "map/1", "version": "0.1.1"}');
 * assertEquals(JSON.parse(await readText(path)).version, "0.1.1");
 * ```
 */
export async function writeFileAtomically(
  path: string,
  data: Uint8Array | string,
  options: ReplaceOptions = {},
): Promise<void> {
  await checkReplaceable(path, options);
  const bytes = typeof data === "string" ? new TextEncoder().encode(data) : data;
  const target = await destination(path);
  let temporary: string | undefined;
  try {
    const opened = await openTemporary(dirname(target));
    temporary = opened.path;
    await writeWhole(opened.file, bytes);
    await Deno.rename(temporary, target);
  } catch (error) {
    if (temporary !== undefined) await Deno.remove(temporary).catch(() => {});
    throw new WorkError({
      action: "write file",
      reason: systemReason(error),
      file: path,
      remedy: "free some space, mend the permissions, or choose another output folder",
    });
  }
}
