import { fitsError } from "./fits_error.ts";
import type { Place } from "./fits_error.ts";

/** The data of one HDU and what decoding them may cost. */
export interface Source extends Place {
  /** The data, without the filling of the last block. */
  readonly bytes: Uint8Array;
  /** Byte of the file at which they begin. */
  readonly offset: number;
  /** Most bytes that one image or column may take once decoded. */
  readonly max_bytes: number;
}

/**
 * Refuses to decode what would take too much memory.
 *
 * @param source Where the limit stands.
 * @param bytes Bytes once decoded.
 * @param key Column, for messages.
 * @throws {InputError} If it is more than the limit.
 */
export function checkDecodedSize(source: Source, bytes: number, key?: string): void {
  if (bytes <= source.max_bytes) return;
  const rule = `one image or column must take at most ${source.max_bytes} bytes once decoded`;
  throw fitsError(source, rule, {
    value: bytes,
    ...(key === undefined ? {} : { key }),
    remedy: "give a smaller file, or raise the limit",
  });
}
