import { InputError } from "../errors.ts";
import { gunzip, isGzip } from "./gunzip.ts";
import { systemReason } from "./system_reason.ts";

/** Options of {@linkcode readBytes} and {@linkcode readText}. */
export interface ReadOptions {
  /**
   * What is being done, for messages.
   * @default {"read file"}
   */
  readonly action?: string;
  /**
   * Largest size, bytes: of the file, and of its content when that is gzipped.
   * @default {2 ** 30}
   */
  readonly max_bytes?: number;
  /**
   * Whether a gzipped file is decompressed. It is recognised by its first bytes, whatever its name.
   * @default {true}
   */
  readonly decompress?: boolean;
}

/**
 * Reads a whole file. Gzipped content is decompressed.
 *
 * @param path The file.
 * @param options What is being done, the size limit, whether to decompress.
 * @returns The bytes.
 * @throws {InputError} If there is no such file, it is not an ordinary file, may not be read, is too
 * large, or its gzip stream is damaged.
 *
 * @example
 * ```ts
 * import { readBytes } from "@millrace/millrace/files";
 * import { InputError } from "@millrace/millrace/errors";
 * import { assertRejects } from "@std/assert";
 *
 * await assertRejects(() => readBytes("no-such-file.fits"), InputError, "the file must exist");
 * ```
 */
export async function readBytes(path: string, options: ReadOptions = {}): Promise<Uint8Array> {
  const { action = "read file", max_bytes = 2 ** 30, decompress = true } = options;
  const refuse = (rule: string, remedy: string, rest: { value?: unknown; unit?: string } = {}) =>
    new InputError({ action, rule, file: path, remedy, ...rest });
  let bytes: Uint8Array;
  try {
    const { isFile, isDirectory, size } = await Deno.stat(path);
    if (!isFile) {
      const what = isDirectory ? "a folder" : "not an ordinary file";
      throw refuse(`a file is needed and this is ${what}`, "give the name of a file");
    }
    if (size > max_bytes) {
      throw refuse(`the file must have at most ${max_bytes} bytes`, "give a smaller file", {
        value: size,
        unit: "bytes",
      });
    }
    bytes = await Deno.readFile(path);
  } catch (error) {
    if (error instanceof InputError) throw error;
    if (error instanceof Deno.errors.NotFound) {
      throw refuse("the file must exist", "check the name and the folder it is looked for in");
    }
    throw refuse(
      `the file must be readable, and ${systemReason(error)}`,
      "check the path and its permissions",
    );
  }
  return decompress && isGzip(bytes) ? gunzip(bytes, { file: path, max_bytes }) : bytes;
}

/**
 * Reads a whole text file as UTF-8; a byte order mark is dropped, gzipped content decompressed.
 *
 * @param path The file.
 * @param options What is being done, the size limit, whether to decompress.
 * @returns The text.
 * @throws {InputError} As {@linkcode readBytes}, and if the bytes are not UTF-8.
 *
 * @example
 * ```ts
 * import { readText, writeFileAtomically } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * const path = `${await Deno.makeTempDir()}/note.txt`;
 * await writeFileAtomically(path, "γ = 27 km/s\n");
 * assertEquals(await readText(path), "γ = 27 km/s\n");
 * ```
 */
export async function readText(path: string, options: ReadOptions = {}): Promise<string> {
  const bytes = await readBytes(path, options);
  try {
    return new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    throw new InputError({
      action: options.action ?? "read file",
      rule: "text must be encoded as UTF-8",
      file: path,
      remedy: "save it as UTF-8 text",
    });
  }
}
