import type { Warning } from "../errors.ts";
import { normalQuantile } from "../numerics/mod.ts";
import type { TrailSamples } from "./check_trail.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";

/** Width of a cell in σ of the profile. */
const CELL_SIGMAS = 4;

/**
 * Warns where data go below zero by more than noise explains: there no positive map can follow.
 *
 * @param trail Exposures, data (with their sign turned for absorption), errors.
 * @param options Systemic velocity and the range of velocities looked at.
 * @returns A warning that names the deepest cell, or none.
 *
 * @example
 * ```ts
 * import { negativeFlux } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0.4),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 3),
 *   velocity_kms: Float64Array.of(-20, 0, 20),
 *   pixel_kms: Float64Array.of(20, 20, 20),
 *   profile_sigma_kms: Float64Array.of(20),
 * };
 * const trail = { sampling, flux: Float64Array.of(1, -2, 1), error: Float64Array.of(0.1, 0.1, 0.1) };
 * const found = negativeFlux(trail, { systemic_kms: 0, half_width_kms: 10 });
 * assertEquals(found.map((w) => w.code), ["negative-flux"]);
 * ```
 */
export function negativeFlux(
  trail: TrailSamples,
  options: { readonly systemic_kms: number; readonly half_width_kms: number },
): Warning[] {
  const { sampling, flux, error } = trail;
  const { systemic_kms, half_width_kms } = options;
  const velocity = shiftVelocities(sampling.velocity_kms, systemFrame(systemic_kms));
  let deepest = 0, phase = 0, at = 0, cells = 0;
  for (let i = 0; i < sampling.count; i++) {
    const width = CELL_SIGMAS * sampling.profile_sigma_kms[i]!;
    const sums = new Map<number, { sum: number; weight: number }>();
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (Math.abs(velocity[k]!) > half_width_kms || !(error[k]! < Infinity)) continue;
      const cell = Math.floor(velocity[k]! / width + 0.5);
      const found = sums.get(cell) ?? { sum: 0, weight: 0 };
      found.sum += flux[k]! / error[k]! ** 2;
      found.weight += 1 / error[k]! ** 2;
      sums.set(cell, found);
    }
    for (const [cell, { sum, weight }] of sums) {
      cells++;
      const z = sum / Math.sqrt(weight);
      if (z < deepest) [deepest, phase, at] = [z, sampling.phase[i]!, cell * width];
    }
  }
  // One false alarm in a thousand trails.
  if (cells === 0 || deepest > normalQuantile(1e-3 / cells)) return [];
  return [{
    code: "negative-flux",
    text: `The data go below zero by ${
      (-deepest).toFixed(1)
    } standard deviations, deepest at phase ${phase.toFixed(2)} and ${
      at.toFixed(0)
    } km/s: no positive map follows them there; a signed one may.`,
  }];
}
