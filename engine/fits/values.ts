/** Numbers in their natural type: unsigned and 64-bit integers are exact. */
export type FitsNumbers =
  | Uint8Array
  | Int8Array
  | Int16Array
  | Uint16Array
  | Int32Array
  | Uint32Array
  | BigInt64Array
  | BigUint64Array
  | Float32Array
  | Float64Array;

/** Numbers, TFORM letters B, I, J, K, E, D, and images. */
export interface NumberValues {
  /** Tells the kinds apart. */
  readonly kind: "number";
  /** Physical values; scaled ones are doubles, NaN where missing. */
  readonly data: FitsNumbers;
  /** 1 where an integer is BLANK or TNULL, otherwise 0; null when there is no such value. */
  readonly missing: Uint8Array | null;
}

/** Logical values, TFORM letter L. */
export interface LogicalValues {
  /** Tells the kinds apart. */
  readonly kind: "logical";
  /** 1 for true, 0 for false and missing. */
  readonly data: Uint8Array;
  /** 1 where the file holds neither T nor F; null when there is no such value. */
  readonly missing: Uint8Array | null;
}

/** Bits, TFORM letter X. */
export interface BitValues {
  /** Tells the kinds apart. */
  readonly kind: "bit";
  /** 0 or 1. */
  readonly data: Uint8Array;
}

/** Strings, TFORM letter A. */
export interface TextValues {
  /** Tells the kinds apart. */
  readonly kind: "text";
  /** Strings up to the first NUL, without trailing blanks. */
  readonly data: readonly string[];
}

/** Complex numbers, TFORM letters C and M. */
export interface ComplexValues {
  /** Tells the kinds apart. */
  readonly kind: "complex";
  /** Real and imaginary parts in turn, stride 2. */
  readonly data: Float32Array | Float64Array;
}

/** Arrays of varying length, TFORM letters P and Q. */
export interface VariableValues {
  /** Tells the kinds apart. */
  readonly kind: "variable";
  /** One array per row. */
  readonly cells: readonly FixedValues[];
}

/** Values of a known number. */
export type FixedValues = NumberValues | LogicalValues | BitValues | TextValues | ComplexValues;

/** Values of a column. */
export type FitsValues = FixedValues | VariableValues;

/**
 * Numbers as doubles.
 *
 * @param data The numbers.
 * @returns Doubles, rounded to the nearest; a `Float64Array` is given as it is, not copied.
 *
 * @example
 * ```ts
 * import { toDoubles } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(toDoubles(new BigInt64Array([2n ** 53n + 1n])), new Float64Array([2 ** 53]));
 * ```
 */
export function toDoubles(data: FitsNumbers): Float64Array {
  if (data instanceof Float64Array) return data;
  if (!(data instanceof BigInt64Array || data instanceof BigUint64Array)) {
    return new Float64Array(data);
  }
  const out = new Float64Array(data.length);
  for (let k = 0; k < out.length; k++) out[k] = Number(data[k]);
  return out;
}

/**
 * Gives numbers, logical values or bits as doubles.
 *
 * @param values The values.
 * @returns Doubles, NaN where missing; integers beyond 2^53 are rounded to the nearest double. A
 * `Float64Array` is given as it is, not copied. Null for strings, complex numbers and arrays of
 * varying length.
 *
 * @example
 * ```ts
 * import { toNumbers } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const data = new Int16Array([5, -32768]);
 * const values = { kind: "number", data, missing: new Uint8Array([0, 1]) } as const;
 * assertEquals(toNumbers(values), new Float64Array([5, NaN]));
 * ```
 */
export function toNumbers(values: FitsValues): Float64Array | null {
  if (values.kind === "text" || values.kind === "complex" || values.kind === "variable") {
    return null;
  }
  const { data } = values;
  const out = toDoubles(data);
  const missing = values.kind === "bit" ? null : values.missing;
  if (missing !== null && out !== data) {
    for (let k = 0; k < out.length; k++) if (missing[k] === 1) out[k] = NaN;
  }
  return out;
}
