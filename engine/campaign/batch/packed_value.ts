import { deserialize, serialize } from "node:v8";
import { sha256 } from "../../files/mod.ts";

const DIGEST_LENGTH = 64;

function digestOf(key: string, payload: Uint8Array): string {
  return sha256(`${key} ${sha256(payload)}`);
}

/**
 * Plain data as bytes for a file of our own, led by a digest of content and key.
 *
 * @param key What the data depend on.
 * @param value The data.
 * @returns The bytes; null when the value holds functions or classes, which would not come back.
 */
export function packValue(key: string, value: unknown): Uint8Array | null {
  if (!isPlain(value)) return null;
  const payload = new Uint8Array(serialize(value));
  const bytes = new Uint8Array(DIGEST_LENGTH + payload.length);
  bytes.set(new TextEncoder().encode(digestOf(key, payload)));
  bytes.set(payload, DIGEST_LENGTH);
  return bytes;
}

/**
 * The data again, bit for bit.
 *
 * @param key What they must depend on.
 * @param bytes The file.
 * @returns The data in `value`; null when the file is damaged or of another key.
 */
export function unpackValue(key: string, bytes: Uint8Array): { readonly value: unknown } | null {
  const payload = bytes.subarray(DIGEST_LENGTH);
  const digest = new TextDecoder().decode(bytes.subarray(0, DIGEST_LENGTH));
  return digest === digestOf(key, payload) ? { value: deserialize(payload) } : null;
}

function isPlain(value: unknown): boolean {
  if (value === null || typeof value !== "object") return typeof value !== "function";
  if (ArrayBuffer.isView(value)) return true;
  if (Array.isArray(value)) return value.every(isPlain);
  return Object.getPrototypeOf(value) === Object.prototype && Object.values(value).every(isPlain);
}
