import type { FoldedExposure } from "./fold.ts";
import type { NormalisedStrip } from "./normalise.ts";
import type { Sampling } from "./sampling.ts";

/** Samples of a trail on native pixels, exposures one after another. */
export interface NativeSamples {
  /** Where the samples are. */
  readonly sampling: Sampling;
  /** Normalised flux minus one; 0 where masked. */
  readonly flux: Float64Array;
  /** One standard deviation; infinite where masked. */
  readonly error: Float64Array;
}

/**
 * Lays the pixels of normalised exposures within the reach one after another.
 *
 * @param strips Normalised exposures in order of time.
 * @param options Reach; and for each strip its phase, the factor on its errors and the standard
 * deviation of its instrumental profile.
 * @returns The samples.
 *
 * @example
 * ```ts
 * import { nativeSamples } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const { sampling } = nativeSamples([], { reach_kms: 1000, folded: [], scales: [], profile_sigma_kms: [] });
 * assertEquals([sampling.count, sampling.start.length], [0, 1]);
 * ```
 */
export function nativeSamples(
  strips: readonly NormalisedStrip[],
  options: {
    readonly reach_kms: number;
    readonly folded: readonly FoldedExposure[];
    readonly scales: readonly number[];
    readonly profile_sigma_kms: readonly number[];
  },
): NativeSamples {
  const { reach_kms, folded, scales, profile_sigma_kms } = options;
  const start = new Uint32Array(strips.length + 1);
  const bounds = strips.map(({ strip }, i) => {
    const v = strip.velocity_kms;
    let from = 0;
    while (from < v.length && v[from]! < -reach_kms) from++;
    let to = from;
    while (to < v.length && v[to]! <= reach_kms) to++;
    start[i + 1] = start[i]! + to - from;
    return [from, to] as const;
  });
  const gather = (pick: (s: NormalisedStrip) => Float64Array) => {
    const out = new Float64Array(start[strips.length]!);
    strips.forEach((s, i) => out.set(pick(s).subarray(...bounds[i]!), start[i]!));
    return out;
  };
  const error = gather((s) => s.error);
  scales.forEach((scale, i) => {
    for (let k = start[i]!; k < start[i + 1]!; k++) error[k]! *= scale;
  });
  return {
    sampling: {
      count: strips.length,
      phase: Float64Array.from(folded, (f) => f.phase),
      cycle: Float64Array.from(folded, (f) => f.cycle),
      phase_width: Float64Array.from(folded, (f) => f.phase_width),
      start,
      velocity_kms: gather((s) => s.strip.velocity_kms),
      pixel_kms: gather((s) => s.strip.pixel_kms),
      profile_sigma_kms: Float64Array.from(profile_sigma_kms),
    },
    flux: gather((s) => s.flux),
    error,
  };
}
