/** Agreement of an HDU with its own checksums; null where the header has none. */
export interface FitsChecksums {
  /** Whether DATASUM agrees with the data. */
  readonly data: boolean | null;
  /** Whether CHECKSUM agrees with header and data together. */
  readonly hdu: boolean | null;
}

// 2^20 words stay below 2^53, so their carries can wait that long.
const CHUNK = 2 ** 22;

function fold(sum: number): number {
  while (sum >= 2 ** 32) sum = sum % 2 ** 32 + Math.floor(sum / 2 ** 32);
  return sum;
}

function sumWords(bytes: Uint8Array): number {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let sum = 0;
  for (let at = 0; at < bytes.length; at += 4) sum += view.getUint32(at);
  return sum;
}

/**
 * The 32-bit one's complement sum of FITS 4.0, Appendix J: big-endian words, carries added back.
 *
 * @param bytes The bytes; missing ones of a last word count as zero.
 * @param start Sum of what came before.
 * @default {0}
 * @returns The sum, from 0 to 2^32 − 1.
 *
 * @example
 * ```ts
 * import { onesComplementSum } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * // 0xffffffff + 2: the carry comes back in at the low end
 * assertEquals(onesComplementSum(new Uint8Array([255, 255, 255, 255, 0, 0, 0, 2])), 2);
 * ```
 */
export function onesComplementSum(bytes: Uint8Array, start = 0): number {
  const whole = bytes.length - bytes.length % 4;
  let sum = start;
  for (let at = 0; at < whole; at += CHUNK) {
    sum = fold(sum + sumWords(bytes.subarray(at, Math.min(whole, at + CHUNK))));
  }
  let rest = 0;
  for (let at = whole; at < whole + 4 && whole < bytes.length; at++) {
    rest = rest * 256 + (bytes[at] ?? 0);
  }
  return fold(sum + rest);
}

// Punctuation between digits and letters that the encoding must not use.
const isPunctuation = (code: number) =>
  (code > 0x39 && code < 0x41) || (code > 0x5a && code < 0x61);

/**
 * Writes a sum as the 16 characters of a CHECKSUM card (FITS 4.0, Appendix J).
 *
 * @param sum The sum of the HDU with CHECKSUM set to sixteen zeros.
 * @returns 16 letters and digits which bring the sum of the HDU to all ones.
 *
 * @example
 * ```ts
 * import { encodeChecksum } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * // FITS 4.0, Appendix J.3 gives this sum and this string as its worked example
 * assertEquals(encodeChecksum(868229149), "hcHjjc9ghcEghc9g");
 * ```
 */
export function encodeChecksum(sum: number): string {
  const complement = (0xffffffff - sum) >>> 0;
  const codes = new Uint8Array(16);
  for (let byte = 0; byte < 4; byte++) {
    const value = complement >>> (24 - 8 * byte) & 0xff;
    const four = Array<number>(4).fill(Math.floor(value / 4) + 0x30);
    four[0]! += value % 4;
    // Pairs move apart by one until neither is punctuation: their sum stays.
    while (four.some(isPunctuation)) {
      for (let k = 0; k < 4; k += 2) {
        if (isPunctuation(four[k]!) || isPunctuation(four[k + 1]!)) {
          four[k]!++;
          four[k + 1]!--;
        }
      }
    }
    four.forEach((code, k) => codes[4 * k + byte] = code);
  }
  // Rotated by one, as the value of the card does not begin at a multiple of four.
  return String.fromCharCode(codes[15]!, ...codes.subarray(0, 15));
}
