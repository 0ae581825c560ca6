/**
 * Edges of pixels given by their centres: half way between neighbours; the outermost pixels are as
 * wide as the step beside them.
 *
 * @param centres Pixel centres, N ≥ 1 values, strictly increasing.
 * @returns N + 1 edges in the same unit. A single pixel is given the width 1.
 *
 * @example
 * ```ts
 * import { pixelEdges } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(pixelEdges(Float64Array.of(1, 2, 4)), Float64Array.of(0.5, 1.5, 3, 5));
 * ```
 */
export function pixelEdges(centres: Float64Array): Float64Array {
  const count = centres.length;
  const edges = new Float64Array(count + 1);
  if (count === 1) return Float64Array.of(centres[0]! - 0.5, centres[0]! + 0.5);
  for (let i = 1; i < count; i++) edges[i] = 0.5 * (centres[i - 1]! + centres[i]!);
  edges[0] = 1.5 * centres[0]! - 0.5 * centres[1]!;
  edges[count] = 1.5 * centres[count - 1]! - 0.5 * centres[count - 2]!;
  return edges;
}
