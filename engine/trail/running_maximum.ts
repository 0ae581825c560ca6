/**
 * For each of some increasing velocities, the highest usable flux of another exposure within a
 * distance in velocity; −Infinity where it has none. Lemire's (2006, arXiv:cs/0610046) monotone
 * queue: linear in the number of pixels.
 *
 * @param other Exposure that is searched: velocities increasing, error infinite where masked.
 * @param velocity_kms Velocities at which the maximum is wanted, km/s, increasing.
 * @param within_kms Distance, km/s.
 * @returns One maximum a velocity.
 *
 * @example
 * ```ts
 * import { runningMaximum } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const other = {
 *   velocity_kms: Float64Array.of(0, 10, 20, 30),
 *   flux: Float64Array.of(1, 5, 2, 3),
 *   error: Float64Array.of(1, Infinity, 1, 1),
 * };
 * assertEquals(runningMaximum(other, Float64Array.of(0, 12, 30), 10), Float64Array.of(1, 2, 3));
 * ```
 */
export function runningMaximum(
  other: {
    readonly velocity_kms: Float64Array;
    readonly flux: Float64Array;
    readonly error: Float64Array;
  },
  velocity_kms: Float64Array,
  within_kms: number,
): Float64Array {
  const { velocity_kms: v, flux, error } = other;
  const queue = new Uint32Array(v.length);
  let head = 0, tail = 0, next = 0;
  return velocity_kms.map((centre) => {
    while (next < v.length && v[next]! <= centre + within_kms) {
      if (Number.isFinite(error[next]!)) {
        while (tail > head && flux[queue[tail - 1]!]! <= flux[next]!) tail--;
        queue[tail++] = next;
      }
      next++;
    }
    while (head < tail && v[queue[head]!]! < centre - within_kms) head++;
    return head < tail ? flux[queue[head]!]! : -Infinity;
  });
}
