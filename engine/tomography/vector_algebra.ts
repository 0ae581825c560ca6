/** Values that stay in the first-level cache while all pairs of vectors are multiplied. */
const CHUNK = 512;

/**
 * Inner products Σ w a b of all pairs of vectors.
 *
 * @param vectors K vectors of one length.
 * @param weight Weights, the same length.
 * @returns K × K row-major, symmetric.
 *
 * @example
 * ```ts
 * import { weightedGram } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const gram = weightedGram([Float64Array.of(1, 2), Float64Array.of(3, 0)], Float64Array.of(1, 10));
 * assertEquals(gram, Float64Array.of(41, 3, 3, 9));
 * ```
 */
export function weightedGram(
  vectors: readonly Float64Array[],
  weight: Float64Array,
): Float64Array {
  const count = vectors.length;
  const gram = new Float64Array(count * count);
  const scaled = new Float64Array(CHUNK);
  for (let from = 0; from < weight.length; from += CHUNK) {
    const to = Math.min(weight.length, from + CHUNK);
    for (let a = 0; a < count; a++) {
      const left = vectors[a]!;
      for (let i = from; i < to; i++) scaled[i - from] = left[i]! * weight[i]!;
      for (let b = 0; b <= a; b++) {
        const right = vectors[b]!;
        let even = 0, odd = 0, i = from;
        for (; i + 1 < to; i += 2) {
          even += scaled[i - from]! * right[i]!;
          odd += scaled[i - from + 1]! * right[i + 1]!;
        }
        if (i < to) even += scaled[i - from]! * right[i]!;
        gram[a * count + b] = gram[a * count + b]! + (even + odd);
      }
    }
  }
  for (let a = 0; a < count; a++) {
    for (let b = 0; b < a; b++) gram[b * count + a] = gram[a * count + b]!;
  }
  return gram;
}

/**
 * Inner product of two vectors.
 *
 * @param a A vector.
 * @param b Another of the same length.
 * @returns Σ a b.
 *
 * @example
 * ```ts
 * import { dotProduct } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(dotProduct(Float64Array.of(1, 2), Float64Array.of(3, 4)), 11);
 * ```
 */
export function dotProduct(a: Float64Array, b: Float64Array): number {
  let even = 0, odd = 0, i = 0;
  for (; i + 1 < a.length; i += 2) {
    even += a[i]! * b[i]!;
    odd += a[i + 1]! * b[i + 1]!;
  }
  return i < a.length ? even + odd + a[i]! * b[i]! : even + odd;
}

/**
 * Linear combination of vectors.
 *
 * @param vectors K vectors of one length, at least one.
 * @param coefficients K factors.
 * @returns Σ c v, a new vector.
 *
 * @example
 * ```ts
 * import { combine } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sum = combine([Float64Array.of(1, 2), Float64Array.of(3, 0)], Float64Array.of(2, -1));
 * assertEquals(sum, Float64Array.of(-1, 4));
 * ```
 */
export function combine(
  vectors: readonly Float64Array[],
  coefficients: Float64Array,
): Float64Array {
  const out = new Float64Array(vectors[0]?.length ?? 0);
  vectors.forEach((vector, k) => {
    const c = coefficients[k]!;
    for (let i = 0; i < out.length; i++) out[i] = out[i]! + c * vector[i]!;
  });
  return out;
}
