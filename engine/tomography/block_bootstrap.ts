import type { RandomStream } from "../numerics/mod.ts";
import { InputError } from "../errors.ts";
import type { Sampling } from "../trail/mod.ts";
import type { TrailSamples } from "./check_trail.ts";

/** Options of {@linkcode blockBootstrap}. */
export interface BlockBootstrapOptions {
  /** Source of chance. */
  readonly random: RandomStream;
  /** Exposures in a block. */
  readonly block: number;
}

/**
 * Draws contiguous blocks of exposures, in order of time, with replacement (Künsch 1989, Ann. Stat. 17,
 * 1217): whatever the noise is, flickering from exposure to exposure included, it is resampled as it
 * came. An exposure drawn m times has its errors divided by √m; one not drawn is masked.
 *
 * @param trail Exposures, data, errors.
 * @param options Source of chance, length of a block.
 * @returns The same data with other errors.
 * @throws {InputError} When a block has no exposure or more than there are.
 *
 * @example
 * ```ts
 * import { blockBootstrap } from "@millrace/millrace/tomography";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 4,
 *   phase: Float64Array.of(0, 0.25, 0.5, 0.75),
 *   cycle: Float64Array.of(0, 0, 0, 0),
 *   phase_width: new Float64Array(4),
 *   start: Uint32Array.of(0, 1, 2, 3, 4),
 *   velocity_kms: new Float64Array(4),
 *   pixel_kms: new Float64Array(4).fill(20),
 *   profile_sigma_kms: new Float64Array(4).fill(40),
 * };
 * const trail = { sampling, flux: new Float64Array(4), error: new Float64Array(4).fill(1) };
 * const { error } = blockBootstrap(trail, { random: randomStream(1), block: 2 });
 * assertAlmostEquals(error.reduce((sum, e) => sum + 1 / e ** 2, 0), 4, 1e-12);
 * ```
 */
export function blockBootstrap(
  trail: TrailSamples,
  options: BlockBootstrapOptions,
): TrailSamples {
  const { random, block } = options;
  const { sampling } = trail;
  if (!Number.isInteger(block) || block < 1 || block > sampling.count) {
    throw new InputError({
      action: "resample exposures",
      rule: `a block must have from 1 to ${sampling.count} exposures`,
      value: block,
    });
  }
  const times = multiplicities(sampling, { random, block });
  const error = trail.error.slice();
  for (let i = 0; i < sampling.count; i++) {
    const from = sampling.start[i]!, to = sampling.start[i + 1]!;
    for (let k = from; k < to; k++) {
      error[k] = times[i] === 0 ? Infinity : error[k]! / Math.sqrt(times[i]!);
    }
  }
  return { sampling, flux: trail.flux, error };
}

function multiplicities(sampling: Sampling, options: BlockBootstrapOptions): Uint32Array {
  const { random, block } = options;
  const { count } = sampling;
  const order = Array.from({ length: count }, (_, i) => i).sort((a, b) =>
    sampling.cycle[a]! - sampling.cycle[b]! || sampling.phase[a]! - sampling.phase[b]! || a - b
  );
  const times = new Uint32Array(count);
  for (let drawn = 0; drawn < count;) {
    const first = random.integer(count);
    for (let j = 0; j < block && drawn < count; j++, drawn++) {
      const i = order[(first + j) % count]!;
      times[i] = times[i]! + 1;
    }
  }
  return times;
}
