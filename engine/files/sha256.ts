import { createHash } from "node:crypto";

/**
 * SHA-256 digest (FIPS 180-4), which names inputs and outputs in the provenance.
 *
 * @param data The bytes, or a text, which is digested as UTF-8.
 * @returns 64 hexadecimal digits, lower-case.
 *
 * @example
 * ```ts
 * import { sha256 } from "@millrace/millrace/files";
 * import { assertEquals } from "@std/assert";
 *
 * // FIPS 180-4, example of a message of one block
 * assertEquals(
 *   sha256("abc"),
 *   "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad",
 * );
 * ```
 */
export function sha256(data: Uint8Array | string): string {
  return createHash("sha256").update(data).digest("hex");
}
