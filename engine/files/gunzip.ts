import { gunzipSync } from "node:zlib";
import { InputError } from "../errors.ts";

/** Options of {@linkcode gunzip}. */
export interface GunzipOptions {
  /** File that the bytes came from, for messages. */
  readonly file?: string;
  /**
   * Largest size after decompression, bytes.
   * @default {2 ** 30}
   */
  readonly max_bytes?: number;
}

/**
 * Tells whether bytes are gzipped (RFC 1952), by their first three.
 *
 * @param bytes The bytes.
 * @returns True when they begin with the magic number and the deflate method.
 *
 * @example
 * ```ts
 * import { isGzip } from "@millrace/millrace/files";
 * import { assert } from "@std/assert";
 *
 * assert(isGzip(new Uint8Array([0x1f, 0x8b, 8, 0])));
 * assert(!isGzip(new TextEncoder().encode("SIMPLE  =")));
 * ```
 */
export function isGzip(bytes: Uint8Array): boolean {
  return bytes[0] === 0x1f && bytes[1] === 0x8b && bytes[2] === 8;
}

/**
 * Decompresses gzip (RFC 1952), also when several members follow each other or zeros pad the end.
 * Decompression stops at the size limit, so a small file cannot fill the memory.
 *
 * @param bytes The gzipped bytes.
 * @param options File name for messages, and the size limit.
 * @returns The decompressed bytes.
 * @throws {InputError} If the stream is damaged, cut off, or larger than the limit.
 *
 * @example
 * ```ts
 * import { gunzip } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 * import { gzipSync } from "node:zlib";
 *
 * const zipped = gzipSync(new TextEncoder().encode("wheel"));
 * assertEquals(new TextDecoder().decode(gunzip(zipped)), "wheel");
 * ```
 */
export function gunzip(bytes: Uint8Array, options: GunzipOptions = {}): Uint8Array {
  const { file, max_bytes = 2 ** 30 } = options;
  try {
    const out = gunzipSync(bytes, { maxOutputLength: max_bytes });
    return new Uint8Array(out.buffer, out.byteOffset, out.byteLength);
  } catch (error) {
    const { code, message } = error as { code?: string; message?: string };
    if (code === "ERR_BUFFER_TOO_LARGE") {
      throw new InputError({
        action: "decompress file",
        rule: "gzipped content must be no larger than the limit",
        value: max_bytes,
        unit: "bytes",
        file,
        remedy: "decompress it with gzip -d first, or raise the limit",
      });
    }
    throw new InputError({
      action: "decompress file",
      rule: `gzipped content must be whole (${message ?? code})`,
      file,
      remedy: "copy the file again from where it came from",
    });
  }
}
