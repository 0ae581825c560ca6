/** Numbers in 16 bits each, as text: small enough for a page. */
export interface PackedArray {
  /** Smallest value. */
  readonly low: number;
  /** Value of one step; the rounding is half of it, 8e-6 of the range. */
  readonly step: number;
  /** Steps as unsigned 16-bit integers, low byte first, in base64; 65535 stands for no value. */
  readonly data: string;
}

const NONE = 65535;

/**
 * Packs numbers for a page. What is not finite is kept as no value.
 *
 * @param values The numbers.
 * @returns Their packed form.
 *
 * @example
 * ```ts
 * import { packArray, unpackArray } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const back = unpackArray(packArray([1, NaN, 2]));
 * assertAlmostEquals(back[2]!, 2, 1e-5);
 * ```
 */
export function packArray(values: ArrayLike<number>): PackedArray {
  let low = Infinity;
  let high = -Infinity;
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    if (!Number.isFinite(value)) continue;
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  if (low > high) low = high = 0;
  const step = (high - low) / (NONE - 1) || 1;
  let bytes = "";
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    const n = Number.isFinite(value) ? Math.round((value - low) / step) : NONE;
    bytes += String.fromCharCode(n & 255, n >> 8);
  }
  return { low, step, data: btoa(bytes) };
}

/**
 * Unpacks what {@linkcode packArray} packed.
 *
 * @param packed The packed numbers.
 * @returns The numbers; NaN where there was no value.
 *
 * @example
 * ```ts
 * import { packArray, unpackArray } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals([...unpackArray(packArray([0, Infinity]))], [0, NaN]);
 * ```
 */
export function unpackArray(packed: PackedArray): Float64Array {
  const bytes = atob(packed.data);
  return Float64Array.from({ length: bytes.length / 2 }, (_, i) => {
    const n = bytes.charCodeAt(2 * i) + 256 * bytes.charCodeAt(2 * i + 1);
    return n === NONE ? NaN : packed.low + n * packed.step;
  });
}
