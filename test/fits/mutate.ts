import { gunzipSync } from "node:zlib";
import { InputError } from "@millrace/millrace/errors";
import { parseFits } from "@millrace/millrace/fits";
import { randomStream } from "@millrace/millrace/numerics";
import type { RandomStream } from "@millrace/millrace/numerics";
import { bytesOfCase, cases, decodeAll } from "./reference.ts";

const WORDS = [
  "NAXIS",
  "NAXIS1",
  "NAXIS2",
  "BITPIX",
  "PCOUNT",
  "GCOUNT",
  "TFIELDS",
  "TFORM1",
  "TFORM2",
  "TDIM1",
  "THEAP",
  "TNULL1",
  "TSCAL1",
  "TBCOL1",
  "BSCALE",
  "BLANK",
  "XTENSION",
  "GROUPS",
  "ZIMAGE",
  "CONTINUE",
  "HIERARCH",
  "EXTNAME",
  "DATASUM",
  "END",
];

const VALUES = [
  "0",
  "1",
  "2",
  "-1",
  "3",
  "8",
  "16",
  "-32",
  "-64",
  "64",
  "999",
  "1000",
  "1000000000000",
  "2147483647",
  "9007199254740993",
  "9223372036854775807",
  "-9223372036854775808",
  "1E300",
  "1E999",
  "NaN",
  "T",
  "F",
  "",
  "'T'",
  "'TABLE   '",
  "'BINTABLE'",
  "'IMAGE   '",
  "'PE(9)'",
  "'QJ'",
  "'999999999999D'",
  "'0A'",
  "'11X'",
  "'A12'",
  "'8A3'",
  "'I6'",
  "'F8.3'",
  "'(2,3)'",
  "'(99999,99999)'",
  "'it''s &'",
  "'open",
  "(1,2)",
];

const pick = <T>(items: readonly T[], random: RandomStream): T =>
  items[random.integer(items.length)]!;

const put = (bytes: Uint8Array, at: number, text: string) => {
  for (let k = 0; k < text.length && at + k < bytes.length; k++) bytes[at + k] = text.charCodeAt(k);
};

// Any record of 80 bytes; mostly one of the first, which are cards for sure.
const anyCard = (bytes: Uint8Array, random: RandomStream) => {
  const cards = Math.max(1, Math.floor(bytes.length / 80));
  return 80 *
    (random.integer(3) === 0 ? random.integer(cards) : random.integer(Math.min(cards, 110)));
};

type Mutation = (bytes: Uint8Array, random: RandomStream) => Uint8Array;

const flipBits: Mutation = (bytes, random) => {
  for (let k = random.integer(8); k >= 0; k--) {
    bytes[random.integer(bytes.length)]! ^= 1 << random.integer(8);
  }
  return bytes;
};

const truncate: Mutation = (bytes, random) => bytes.subarray(0, random.integer(bytes.length + 1));

const editCard: Mutation = (bytes, random) => {
  const text = `${pick(WORDS, random).padEnd(8)}= ${pick(VALUES, random).padStart(20)}`;
  put(bytes, anyCard(bytes, random), text.padEnd(80));
  return bytes;
};

const editValue: Mutation = (bytes, random) => {
  put(bytes, anyCard(bytes, random) + 10, pick(VALUES, random).padStart(20).padEnd(40));
  return bytes;
};

const editNumber: Mutation = (bytes, random) => {
  const digits: number[] = [];
  bytes.forEach((byte, k) => byte >= 0x30 && byte <= 0x39 && digits.push(k));
  for (let k = random.integer(4); k >= 0 && digits.length > 0; k--) {
    bytes[pick(digits, random)] = 0x30 + random.integer(10);
  }
  return bytes;
};

const swapCards: Mutation = (bytes, random) => {
  const [a, b] = [anyCard(bytes, random), anyCard(bytes, random)];
  const kept = bytes.slice(a, a + 80);
  bytes.copyWithin(a, b, b + 80);
  bytes.set(kept.subarray(0, Math.max(0, Math.min(80, bytes.length - b))), b);
  return bytes;
};

const repeatPart: Mutation = (bytes, random) => {
  const from = random.integer(bytes.length);
  const part = bytes.subarray(from, from + random.integer(6000));
  const out = new Uint8Array(bytes.length + part.length);
  out.set(bytes);
  out.copyWithin(from + part.length, from, bytes.length);
  return out;
};

const MUTATIONS = [
  flipBits,
  truncate,
  editCard,
  editCard,
  editValue,
  editValue,
  editNumber,
  swapCards,
  repeatPart,
];

/** The reference files, as they are and with gzip undone. */
export async function seeds(): Promise<Uint8Array[]> {
  const files = await Promise.all(cases.map(({ file }) => bytesOfCase(file)));
  return files.flatMap((bytes) => bytes[0] === 0x1f ? [bytes, gunzipSync(bytes)] : [bytes]);
}

/** What became of mutated files. */
export interface FuzzResult {
  /** Inputs that were read. */
  readonly read: number;
  /** Inputs that were refused by an InputError. */
  readonly refused: number;
  /** Anything else that was thrown, with the number of the input. */
  readonly faults: readonly string[];
  /** The longest time for one input, ms, and its number. */
  readonly slowest: { readonly ms: number; readonly index: number };
}

/**
 * Reads mutated reference files and decodes all that is in them. Input k depends on k alone, so a
 * fault can be had again.
 */
export async function fuzz(first: number, count: number): Promise<FuzzResult> {
  const originals = await seeds();
  let read = 0;
  let refused = 0;
  let slowest = { ms: 0, index: -1 };
  const faults: string[] = [];
  for (let index = first; index < first + count; index++) {
    const random = randomStream(index);
    let bytes: Uint8Array = new Uint8Array(pick(originals, random));
    for (let k = random.integer(3); k >= 0 && bytes.length > 0; k--) {
      bytes = new Uint8Array(pick(MUTATIONS, random)(bytes, random));
    }
    const start = performance.now();
    try {
      const { hdus } = parseFits(bytes, { file: "mutated.fits" });
      let error: unknown;
      // A damaged HDU must not keep the others from being decoded.
      for (const hdu of hdus) {
        try {
          decodeAll(hdu);
        } catch (thrown) {
          error = thrown;
          if (!(thrown instanceof InputError)) break;
        }
      }
      if (error !== undefined) throw error;
      read++;
    } catch (error) {
      if (error instanceof InputError) refused++;
      else faults.push(`input ${index}: ${error instanceof Error ? error.stack : error}`);
    }
    const ms = performance.now() - start;
    if (ms > slowest.ms) slowest = { ms, index };
  }
  return { read, refused, faults, slowest };
}
