import { randomStream } from "../numerics/mod.ts";
import type { Pause } from "../workers/mod.ts";
import { blockBootstrap } from "./block_bootstrap.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type Excess, mapExcess } from "./map_excess.ts";
import { type InversionRecipe, type Inverter, makeInverter } from "./invert_trail.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import { noiseReplica } from "./noise_replica.ts";
import { makeSeparateInverter, type SeparateRecipe } from "./separate_inverter.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** What all replicas have in common. */
export interface ReplicaShared {
  /** The observed trail. */
  readonly trail: TrailSamples;
  /** How a map is made. */
  readonly recipe: InversionRecipe | SeparateRecipe;
  /** Seed; replica r takes stream r. */
  readonly seed: number;
  /** Exposures in a block of the bootstrap; 0 adds noise instead. */
  readonly block: number;
  /** Features to follow, and how they are measured. */
  readonly follow: {
    /** Pixels of the features' peaks. */
    readonly peaks: readonly number[];
    /** Centre of the axisymmetric part. */
    readonly centre: MapPlace;
    /** Resolution of the map, km/s. */
    readonly resolution_kms: number;
    /** Map that is taken off first; null for none. */
    readonly alone: VelocityMap | null;
  };
}

/** A run of replicas. */
export interface ReplicaTask {
  /** First replica. */
  readonly from: number;
  /** One past the last. */
  readonly to: number;
}

/** Sums over a run of replicas. */
export interface ReplicaSums {
  /** Sum of the maps. */
  readonly sum: Float64Array;
  /** Sum of squared differences from the run's own mean. */
  readonly square: Float64Array;
  /** Number of maps in the sums. */
  readonly count: number;
  /** Features × replicas of the run, row-major, stride of the run's length: Vx, km/s; NaN where lost. */
  readonly vx_kms: Float64Array;
  /** The same of Vy. */
  readonly vy_kms: Float64Array;
  /** The same of the excess at the feature's own pixel. */
  readonly height: Float64Array;
  /** The same of its flux over that of the map; NaN where lost. */
  readonly flux_fraction: Float64Array;
}

const REPLICAS_BETWEEN_PAUSES = 8;
const prepared = new WeakMap<ReplicaShared, Inverter>();

/**
 * Makes a run of replicas: the work of one task of {@linkcode resampleMaps}.
 *
 * @param task Which replicas.
 * @param shared Trail, recipe, seed.
 * @param pause Awaited after every few replicas.
 * @returns Sums of the maps, and the features in each.
 *
 * @example
 * ```ts
 * import { runTask } from "./replica_task.ts";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(typeof runTask, "function");
 * ```
 */
export async function runTask(
  task: ReplicaTask,
  shared: ReplicaShared,
  pause: Pause,
): Promise<ReplicaSums> {
  const { trail, recipe, seed, block, follow } = shared;
  let invert = prepared.get(shared);
  if (invert === undefined) prepared.set(shared, invert = inverterOf(trail, recipe));
  const size = recipe.pixels ** 2, count = task.to - task.from;
  const mean = new Float64Array(size), square = new Float64Array(size);
  const places = follow.peaks.length * count;
  const vx_kms = new Float64Array(places).fill(NaN), vy_kms = new Float64Array(places).fill(NaN);
  const height = new Float64Array(places), flux_fraction = new Float64Array(places).fill(NaN);
  for (let r = task.from; r < task.to; r++) {
    if ((r - task.from) % REPLICAS_BETWEEN_PAUSES === 0) await pause();
    const random = randomStream(seed, r);
    const data = block > 0
      ? blockBootstrap(trail, { random, block })
      : { sampling: trail.sampling, ...noiseReplica(trail, random) };
    const { map } = invert(data);
    const done = r - task.from + 1;
    for (let i = 0; i < size; i++) {
      // Welford's update: no cancellation, whatever the level.
      const off = map.intensity[i]! - mean[i]!;
      mean[i] = mean[i]! + off / done;
      square[i] = square[i]! + off * (map.intensity[i]! - mean[i]!);
    }
    if (follow.peaks.length === 0) continue;
    const excess: Excess = mapExcess(map, follow);
    follow.peaks.forEach((peak, f) => {
      const at = f * count + r - task.from;
      height[at] = excess.values[peak]!;
      const blob = excess.blobAt(excess.climb(peak));
      if (blob === null) return;
      vx_kms[at] = blob.vx_kms;
      vy_kms[at] = blob.vy_kms;
      flux_fraction[at] = blob.flux_fraction;
    });
  }
  const sum = mean.map((m) => m * count);
  return { sum, square, count, vx_kms, vy_kms, height, flux_fraction };
}

function inverterOf(trail: TrailSamples, recipe: ReplicaShared["recipe"]): Inverter {
  return recipe.inversion === "separate-entropy"
    ? makeSeparateInverter(trail, recipe)
    : makeInverter(trail, recipe);
}

/** The sums are made for the result alone: they may be moved. */
export function transfer(result: ReplicaSums): ArrayBuffer[] {
  return [result.sum, result.square].map((a) => a.buffer as ArrayBuffer);
}
