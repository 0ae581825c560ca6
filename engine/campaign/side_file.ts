import { isAbsolute, join, relative } from "@std/path";
import { InputError } from "../errors.ts";
import { readBytes, sha256 } from "../files/mod.ts";
import type { InputDigest } from "./output_head.ts";
import type { Target } from "./target.ts";

/** A text file that a key of the target file names. */
export interface SideFile {
  /** Path that can be opened. */
  readonly path: string;
  /** Its path from the target file, with the digest of its bytes. */
  readonly input: InputDigest;
  /** Its text. */
  readonly text: string;
}

/**
 * Reads a text file that a key of the target file names, such as a table beside the exposures.
 *
 * @param target The target.
 * @param options Which.
 * @param options.key The key, for messages.
 * @param options.value What stands there.
 * @param options.action What is being done, for messages.
 * @param options.remedy What else may stand there.
 * @returns Path, digest, text.
 * @throws {InputError} When there is no such file (it names key and line of the target file), or it
 * cannot be read.
 */
export async function readSideFile(
  target: Target,
  options: { key: string; value: string; action: string; remedy: string },
): Promise<SideFile> {
  const { key, value, action, remedy } = options;
  const path = isAbsolute(value) ? value : join(target.folder, value);
  const place = { file: target.file, line: target.places.get(key)?.line, key };
  const there = await Deno.stat(path).then(({ isFile }) => isFile, () => false);
  if (!there) {
    throw new InputError({ action, rule: "the file must exist", value, ...place, remedy });
  }
  const bytes = await readBytes(path, { action, decompress: false });
  try {
    return {
      path,
      input: { file: relative(target.folder, path), sha256: sha256(bytes) },
      text: new TextDecoder("utf-8", { fatal: true }).decode(bytes),
    };
  } catch {
    throw new InputError({ action, rule: "the file must be UTF-8 text", value, ...place, remedy });
  }
}
