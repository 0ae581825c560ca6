import { turnByteOrder } from "./byte_order.ts";
import { toDoubles } from "./values.ts";
import type { FitsNumbers, NumberValues } from "./values.ts";

/** TFORM letters of real numbers. */
export type NumberLetter = "B" | "I" | "J" | "K" | "E" | "D";

/** Bytes of one number. */
export const NUMBER_BYTES: Readonly<Record<NumberLetter, number>> = {
  B: 1,
  I: 2,
  J: 4,
  K: 8,
  E: 4,
  D: 8,
};

/** How stored numbers become physical ones. */
export interface Scaling {
  /** BSCALE or TSCALn. */
  readonly scale: number;
  /** BZERO or TZEROn. */
  readonly zero: number;
  /** BLANK or TNULLn, a stored value. */
  readonly blank: number | bigint | null;
}

/** No scaling and no missing value. */
export const UNSCALED: Scaling = { scale: 1, zero: 0, blank: null };

function stored(bytes: Uint8Array, letter: NumberLetter): FitsNumbers {
  const buffer = turnByteOrder(bytes, NUMBER_BYTES[letter]);
  switch (letter) {
    case "B":
      return new Uint8Array(buffer);
    case "I":
      return new Int16Array(buffer);
    case "J":
      return new Int32Array(buffer);
    case "K":
      return new BigInt64Array(buffer);
    case "E":
      return new Float32Array(buffer);
    case "D":
      return new Float64Array(buffer);
  }
}

function findBlanks(data: FitsNumbers, blank: number | bigint | null): Uint8Array | null {
  if (blank === null || data instanceof Float32Array || data instanceof Float64Array) return null;
  const big = data instanceof BigInt64Array || data instanceof BigUint64Array;
  if (typeof blank === "number" && !Number.isInteger(blank)) return null;
  const wanted = big ? BigInt(blank) : Number(blank);
  let missing: Uint8Array | null = null;
  for (let k = 0; k < data.length; k++) {
    if (data[k] === wanted) (missing ??= new Uint8Array(data.length))[k] = 1;
  }
  return missing;
}

// Zero points that only shift the sign: the other signedness of each width (FITS 4.0, table 11). In
// two's complement that is the highest bit turned over.
function otherSignedness(data: FitsNumbers, { scale, zero }: Scaling): FitsNumbers | null {
  if (scale !== 1) return null;
  const { buffer } = data;
  if (data instanceof Uint8Array && zero === -128) {
    for (let k = 0; k < data.length; k++) data[k]! ^= 0x80;
    return new Int8Array(buffer);
  }
  if (data instanceof Int16Array && zero === 2 ** 15) {
    const out = new Uint16Array(buffer);
    for (let k = 0; k < out.length; k++) out[k]! ^= 0x8000;
    return out;
  }
  if (data instanceof Int32Array && zero === 2 ** 31) {
    for (let k = 0; k < data.length; k++) data[k]! ^= 0x80000000;
    return new Uint32Array(buffer);
  }
  if (data instanceof BigInt64Array && zero === 2 ** 63) {
    const out = new BigUint64Array(buffer);
    for (let k = 0; k < out.length; k++) out[k]! ^= 2n ** 63n;
    return out;
  }
  return null;
}

function scaled(data: FitsNumbers, missing: Uint8Array | null, scaling: Scaling): Float64Array {
  const { scale, zero } = scaling;
  const out = toDoubles(data);
  for (let k = 0; k < out.length; k++) out[k] = zero + scale * out[k]!;
  if (missing !== null) {
    for (let k = 0; k < out.length; k++) if (missing[k] === 1) out[k] = NaN;
  }
  return out;
}

/**
 * Decodes big-endian numbers: physical = zero + scale × stored (FITS 4.0, 4.4.2.5 and 7.3.2).
 *
 * @param bytes The bytes, a whole number of values.
 * @param letter TFORM letter of the type.
 * @param scaling Scale, zero point and missing value.
 * @returns Physical values: as stored when unscaled, unsigned (or signed bytes) for the zero points
 * that mean this, otherwise doubles.
 */
export function decodeNumbers(
  bytes: Uint8Array,
  letter: NumberLetter,
  scaling: Scaling = UNSCALED,
): NumberValues {
  const raw = stored(bytes, letter);
  const missing = findBlanks(raw, scaling.blank);
  const plain = scaling.scale === 1 && scaling.zero === 0;
  const data = plain ? raw : otherSignedness(raw, scaling) ?? scaled(raw, missing, scaling);
  return { kind: "number", data, missing };
}
