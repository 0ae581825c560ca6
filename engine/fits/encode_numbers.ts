import { InputError } from "../errors.ts";
import { turnByteOrder } from "./byte_order.ts";
import type { NumberLetter } from "./decode_numbers.ts";
import type { FitsNumbers } from "./values.ts";

/** Numbers as they are stored. */
export interface EncodedNumbers {
  /** Big-endian bytes. */
  readonly bytes: Uint8Array;
  /** TFORM letter. */
  readonly letter: NumberLetter;
  /** Zero point that makes the stored numbers those given; 0 when none is needed. */
  readonly zero: number | bigint;
}

const bytesOf = (data: FitsNumbers) =>
  new Uint8Array(turnByteOrder(
    new Uint8Array(data.buffer as ArrayBuffer, data.byteOffset, data.byteLength),
    data.BYTES_PER_ELEMENT,
  ));

/**
 * Encodes numbers; types that FITS has no letter for are shifted by half their range (FITS 4.0,
 * table 11).
 *
 * @param data The numbers.
 * @returns Bytes, letter and zero point.
 */
export function encodeNumbers(data: FitsNumbers): EncodedNumbers {
  const plain = (letter: NumberLetter) => ({ bytes: bytesOf(data), letter, zero: 0 });
  if (data instanceof Float64Array) return plain("D");
  if (data instanceof Float32Array) return plain("E");
  if (data instanceof Int32Array) return plain("J");
  if (data instanceof Int16Array) return plain("I");
  if (data instanceof BigInt64Array) return plain("K");
  if (data instanceof Uint8Array) return plain("B");
  if (data instanceof Int8Array) {
    return { bytes: Uint8Array.from(data, (x) => x ^ 0x80), letter: "B", zero: -128 };
  }
  if (data instanceof Uint16Array) {
    const bytes = bytesOf(Uint16Array.from(data, (x) => x ^ 0x8000));
    return { bytes, letter: "I", zero: 2 ** 15 };
  }
  if (data instanceof Uint32Array) {
    const bytes = bytesOf(Uint32Array.from(data, (x) => x ^ 0x80000000));
    return { bytes, letter: "J", zero: 2 ** 31 };
  }
  const bytes = bytesOf(BigUint64Array.from(data, (x) => x ^ 2n ** 63n));
  return { bytes, letter: "K", zero: 2n ** 63n };
}

/**
 * The stored form of a value that means missing.
 *
 * @param blank The value as it stands in the data.
 * @param encoded The encoded data.
 * @param key Keyword or column, for messages.
 * @returns The value for BLANK or TNULLn.
 * @throws {InputError} If the data are not integers or the value is none.
 */
export function storedBlank(
  blank: number | bigint,
  encoded: EncodedNumbers,
  key: string,
): bigint {
  const floating = encoded.letter === "E" || encoded.letter === "D";
  if (floating || (typeof blank === "number" && !Number.isSafeInteger(blank))) {
    throw new InputError({
      action: "write FITS file",
      rule: "only integers have a value that means missing, and it must be an integer",
      value: String(blank),
      key,
      remedy: "use NaN in floating-point data",
    });
  }
  return BigInt(blank) - BigInt(encoded.zero);
}
