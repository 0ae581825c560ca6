import type { RandomStream } from "../numerics/mod.ts";
import { backProject } from "../tomography/mod.ts";
import type { Trail } from "../trail/mod.ts";
import { type WingSymmetry, wingSymmetry } from "./wing_symmetry.ts";

/** Options of {@linkcode trailSymmetry}. */
export interface TrailSymmetryOptions {
  /** γ, km/s. */
  readonly systemic_kms: number;
  /** Speeds about the centre that count as wings, km/s. */
  readonly wing_kms: readonly [inner: number, outer: number];
  /** Source of chance. */
  readonly random: RandomStream;
  /** Noise replicas for the errors. @default {16} */
  readonly replicas?: number;
}

/**
 * K1 from the point symmetry of the wings of a trail's back-projected map, with errors from replicas
 * of the trail with noise added. A witness beside the plateau: back-projection leaves streaks in a
 * map of few exposures, and they are not in the error.
 *
 * @param trail The line's trail; its display grid is used.
 * @param options γ, wings, chance.
 * @returns Centre of symmetry.
 * @throws {InputError} When the wings are not a rising range, or nothing of the trail is covered.
 *
 * @example
 * ```ts
 * import { randomStream } from "@millrace/millrace/numerics";
 * import type { Trail } from "@millrace/millrace/trail";
 * import { trailSymmetry } from "@millrace/millrace/orbit";
 *
 * function speed(trail: Trail): number {
 *   return trailSymmetry(trail, {
 *     systemic_kms: 0, wing_kms: [1000, 1500], random: randomStream(1),
 *   }).k_accretor_kms;
 * }
 * ```
 */
export function trailSymmetry(trail: Trail, options: TrailSymmetryOptions): WingSymmetry {
  const { systemic_kms, wing_kms, random, replicas = 16 } = options;
  const { grid } = trail;
  const pixel = Math.max(grid.step_kms, wing_kms[1] / 60);
  const half = Math.ceil(1.15 * wing_kms[1] / pixel);
  const shape = {
    pixels: 2 * half + 1,
    half_width_kms: half * pixel,
    systemic_kms,
    roll_off_fwhm_kms: wing_kms[0] / 4,
  };
  const noisy = () =>
    grid.flux.map((f, n) => {
      const draw = random.normal();
      return grid.error[n]! < Infinity ? f + grid.error[n]! * draw : f;
    });
  const resampled = Array.from(
    { length: replicas },
    () => backProject({ grid: { ...grid, flux: noisy() } }, shape),
  );
  return wingSymmetry(backProject(trail, shape), { wing_kms, resampled });
}
