import { smearingRule } from "../tomography/mod.ts";
import type { ExposureSamples } from "./emission.ts";
import {
  addTable,
  blur,
  deposit,
  emptyTable,
  POINTS_PER_SIGMA,
  REACH_SIGMA,
} from "./velocity_table.ts";

/** Light at N points of velocity space, whose brightness may depend on the phase. */
export interface PointCloud {
  /** Map coordinates, N values each, km/s. */
  readonly vx_kms: Float64Array;
  readonly vy_kms: Float64Array;
  /** Equivalent width of each point, N values, km/s. */
  readonly light_kms: Float64Array;
  /** Standard deviation of the velocities at each point, km/s. */
  readonly sigma_kms: number;
  /** Added to the velocity along the line of sight at every phase, km/s. */
  readonly shift_kms: number;
  /** Where the points are, for eclipses; null when nothing can hide them. */
  readonly place:
    | { readonly x: Float64Array; readonly y: Float64Array; readonly z: Float64Array }
    | null;
  /** Multiplies `share` (N values) by the brightness at a phase; null when it is always 1. */
  readonly brightness: ((phase: number, share: Float64Array) => void) | null;
}

/** Up to this many points a Gaussian is computed for each; beyond, a table serves all. */
const FEW = 6;

/** Least number of instants in an exposure of light that varies with phase. */
const VARYING_WIDTH = 3;

/**
 * The function that adds a cloud to an exposure: each point on its S-wave
 * V = −Vx cos 2πφ + Vy sin 2πφ, seen through the exposure's profile and averaged over its duration.
 */
export function cloudAdder(cloud: PointCloud): (exposure: ExposureSamples) => void {
  const { vx_kms, vy_kms, light_kms, sigma_kms, shift_kms, brightness } = cloud;
  const count = light_kms.length;
  let fastest = 0;
  for (let k = 0; k < count; k++) fastest = Math.max(fastest, Math.hypot(vx_kms[k]!, vy_kms[k]!));
  const share = new Float64Array(count).fill(1);

  return ({ phase, phase_width, sigma_kms: instrument, velocity, from, to, into }) => {
    const sigma = Math.hypot(instrument, sigma_kms);
    const smear = 2 * Math.PI * phase_width * fastest / sigma;
    const least = brightness === null || phase_width === 0 ? 0 : VARYING_WIDTH;
    const { offset, weight } = smearingRule(phase_width, Math.max(smear, least));
    const table = count <= FEW ? null : emptyTable(sigma / POINTS_PER_SIGMA, fastest);
    for (let q = 0; q < offset.length; q++) {
      const at = phase + offset[q]!;
      const cos = Math.cos(2 * Math.PI * at), sin = Math.sin(2 * Math.PI * at);
      if (brightness !== null) brightness(at, share.fill(1));
      for (let k = 0; k < count; k++) {
        const light = weight[q]! * light_kms[k]! * share[k]!;
        if (light === 0) continue;
        const v = -vx_kms[k]! * cos + vy_kms[k]! * sin;
        if (table === null) {
          addGaussian({ centre: v + shift_kms, sigma, light }, { velocity, from, to, into });
        } else deposit(table, v, light);
      }
    }
    if (table === null) return;
    addTable(blur(table, sigma), { velocity, from, to, shift: shift_kms, scale: 1, into });
  };
}

/** Adds a Gaussian of given light to samples within its reach. */
export function addGaussian(
  { centre, sigma, light }: {
    readonly centre: number;
    readonly sigma: number;
    readonly light: number;
  },
  { velocity, from, to, into }: Pick<ExposureSamples, "velocity" | "from" | "to" | "into">,
): void {
  const peak = light / (Math.sqrt(2 * Math.PI) * sigma);
  const low = centre - REACH_SIGMA * sigma;
  const high = centre + REACH_SIGMA * sigma;
  let first = from, beyond = to;
  while (first < beyond) {
    const middle = (first + beyond) >> 1;
    if (velocity[middle]! < low) first = middle + 1;
    else beyond = middle;
  }
  for (let n = first; n < to && velocity[n]! <= high; n++) {
    const z = (velocity[n]! - centre) / sigma;
    into[n]! += peak * Math.exp(-0.5 * z * z);
  }
}
