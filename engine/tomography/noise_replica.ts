import type { RandomStream } from "../numerics/mod.ts";
import type { Samples } from "./map_fit.ts";

/**
 * Data with noise of the stated errors added once more. Replicas of this kind scatter as the data
 * do about the truth; masked samples stay as they are.
 *
 * @param samples Data and errors.
 * @param random Source of chance.
 * @returns New data with the same errors.
 *
 * @example
 * ```ts
 * import { noiseReplica } from "@millrace/millrace/tomography";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertEquals } from "@std/assert";
 *
 * const samples = { flux: Float64Array.of(1, 0), error: Float64Array.of(0.1, Infinity) };
 * const replica = noiseReplica(samples, randomStream(1));
 * assertEquals(replica.flux[1], 0);
 * ```
 */
export function noiseReplica(samples: Samples, random: RandomStream): Samples {
  const { flux, error } = samples;
  return {
    flux: flux.map((f, k) => {
      const draw = random.normal();
      return Number.isFinite(error[k]!) ? f + error[k]! * draw : f;
    }),
    error,
  };
}
