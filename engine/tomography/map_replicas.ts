import type { Progress } from "../workers/mod.ts";
import { runTasks } from "../workers/mod.ts";
import { InputError } from "../errors.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import type { TrailSamples } from "./check_trail.ts";
import type { InversionRecipe } from "./invert_trail.ts";
import type { ReplicaShared, ReplicaSums, ReplicaTask } from "./replica_task.ts";
import type { SeparateRecipe } from "./separate_inverter.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** Options of {@linkcode resampleMaps}. */
export interface ResampleOptions {
  /** Number of replicas, at least 2. */
  readonly count: number;
  /** Seed; replica r takes stream r. */
  readonly seed: number;
  /**
   * `noise`: the data with noise of the stated errors added once more. `bootstrap`: contiguous blocks
   * of exposures drawn with replacement, which holds for flickering too.
   *
   * @default {"noise"}
   */
  readonly kind?: "noise" | "bootstrap";
  /**
   * Exposures in a block of the bootstrap.
   *
   * @default {the cube root of their number, rounded up}
   */
  readonly block?: number;
  /**
   * Pixels of the peaks of features to follow; from `mapExcess(map, …).peaks`.
   *
   * @default {[]}
   */
  readonly peaks?: readonly number[];
  /**
   * Centre of the axisymmetric part that features stand out of.
   *
   * @default {{ vx_kms: 0, vy_kms: 0 }}
   */
  readonly centre?: MapPlace;
  /**
   * What sampling and inversion make alone, taken off each map before features are measured; as
   * {@linkcode mapExplainer} gives it without spots.
   *
   * @default {null}
   */
  readonly alone?: VelocityMap | null;
  /**
   * Resolution (FWHM) that features are measured at, km/s.
   *
   * @default {two map pixels}
   */
  readonly resolution_kms?: number;
  /**
   * Worker threads. The result is the same to the bit for any number.
   *
   * @default {1}
   */
  readonly workers?: number;
  /** Called as replicas are done, with `"replicas"`. */
  readonly progress?: Progress;
  /** Ends the work early. */
  readonly signal?: AbortSignal;
}

/** A feature in the replicas. */
export interface FollowedFeature {
  /** Vx in each replica, km/s; NaN where it was lost. */
  readonly vx_kms: Float64Array;
  /** Vy in each replica, km/s. */
  readonly vy_kms: Float64Array;
  /** Excess at the feature's own pixel in each replica. */
  readonly height: Float64Array;
  /** Flux of the excess over that of the whole map in each replica; NaN where it was lost. */
  readonly flux_fraction: Float64Array;
}

/** How maps scatter under resampling. */
export interface MapSpread {
  /** Number of replicas. */
  readonly count: number;
  /** Mean of the replicas. */
  readonly mean: VelocityMap;
  /** Standard deviation of the replicas in each pixel. */
  readonly deviation: VelocityMap;
  /** The features asked for, in the order asked. */
  readonly features: readonly FollowedFeature[];
}

/** Runs that the replicas are cut into, whatever the number of workers. */
const RUNS = 40;

/**
 * Makes a map of each of many resamples of a trail. Only sums of the maps are kept: memory does not
 * grow with the number of replicas.
 *
 * Errors of a maximum-entropy map need its multiplier held: give the recipe `multiplier` and `start`
 * of the map itself, since fixing chi-square fits noise on noise. With a recipe of overlapping lines all
 * their maps are made anew in each replica, and the first one is looked at.
 *
 * @param trail The observed trail.
 * @param options How to make a map, and how to resample.
 * @returns Mean, spread and followed features.
 * @throws {InputError} When fewer than two replicas are asked for, or a map cannot be made.
 *
 * @example
 * ```ts
 * import { makeProjector, resampleMaps } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 20, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 41, half_width_kms: 400, systemic_kms: 0 };
 * const flux = makeProjector(sampling, shape).forward(new Float64Array(41 * 41).fill(1e-4));
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const { deviation } = await resampleMaps(trail, {
 *   recipe: { inversion: "back-projection", ...shape },
 *   count: 4,
 *   seed: 1,
 * });
 * assert(deviation.intensity.every((d) => d > 0));
 * ```
 */
export async function resampleMaps(
  trail: TrailSamples,
  options: ResampleOptions & { readonly recipe: InversionRecipe | SeparateRecipe },
): Promise<MapSpread> {
  const { recipe, count, seed, kind = "noise", peaks = [], workers = 1 } = options;
  const { progress, signal, centre = { vx_kms: 0, vy_kms: 0 }, alone = null } = options;
  const { pixels, half_width_kms } = recipe;
  const { resolution_kms = 4 * half_width_kms / (pixels - 1) } = options;
  const { block = Math.ceil(Math.cbrt(trail.sampling.count)) } = options;
  if (!Number.isInteger(count) || count < 2) {
    throw new InputError({
      action: "resample maps",
      rule: "the number of replicas must be whole and at least 2",
      value: count,
      key: "map.resamples",
    });
  }
  const run = Math.ceil(count / RUNS);
  const tasks: ReplicaTask[] = [];
  for (let from = 0; from < count; from += run) {
    tasks.push({ from, to: Math.min(count, from + run) });
  }
  const shared: ReplicaShared = {
    trail: { sampling: trail.sampling, flux: trail.flux, error: trail.error },
    recipe,
    seed,
    block: kind === "bootstrap" ? block : 0,
    follow: { peaks, centre, resolution_kms, alone },
  };
  const sums = await runTasks<ReplicaTask, ReplicaSums, ReplicaShared>(tasks, {
    module: new URL("./replica_task.ts", import.meta.url),
    workers,
    shared,
    what: "replicas",
    signal,
    progress: progress &&
      ((done, _total, what) => progress(Math.min(count, done * run), count, what)),
  });

  const size = pixels * pixels;
  const total = new Float64Array(size);
  for (const { sum } of sums) for (let i = 0; i < size; i++) total[i] = total[i]! + sum[i]!;
  const mean = total.map((t) => t / count);
  const square = new Float64Array(size);
  for (const part of sums) {
    for (let i = 0; i < size; i++) {
      const off = part.sum[i]! / part.count - mean[i]!;
      square[i] = square[i]! + part.square[i]! + part.count * off * off;
    }
  }
  const shape = { pixels, half_width_kms };
  return {
    count,
    mean: { ...shape, intensity: mean },
    deviation: { ...shape, intensity: square.map((s) => Math.sqrt(s / (count - 1))) },
    features: peaks.map((_, f) => ({
      vx_kms: followed(sums, "vx_kms", f),
      vy_kms: followed(sums, "vy_kms", f),
      height: followed(sums, "height", f),
      flux_fraction: followed(sums, "flux_fraction", f),
    })),
  };
}

function followed(
  sums: readonly ReplicaSums[],
  key: keyof FollowedFeature,
  feature: number,
): Float64Array {
  return Float64Array.from(
    sums.flatMap((part) =>
      Array.from(part[key].subarray(feature * part.count, (feature + 1) * part.count))
    ),
  );
}
