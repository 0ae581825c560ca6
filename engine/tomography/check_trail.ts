import { InputError, type Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import { largestHalfOrbitGap } from "./half_orbit.ts";
import type { Samples } from "./map_fit.ts";
import { checkMapShape, type MapShape } from "./map_shape.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";

/** Largest gap modulo half an orbit that a map is made with, cycles. */
const LARGEST_GAP = 0.35;

/** What an inversion needs of a trail: where the samples are, the data and their errors. */
export interface TrailSamples extends Samples {
  /** Exposures with their native pixels. */
  readonly sampling: Sampling;
}

/** Options of {@linkcode checkTrail}. */
export interface CheckTrailOptions extends MapShape {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /**
   * Whether to go on in spite of a large gap in phase.
   *
   * @default {false}
   */
  readonly force?: boolean;
}

/**
 * Refuses what no map can be made of, and warns of what a map would suffer from. Exposures that are
 * masked altogether do not count.
 *
 * @param trail Exposures, data, errors.
 * @param options The map wanted.
 * @returns Warnings; they belong on the plate.
 * @throws {InputError} For fewer than three exposures, an error that is not positive, a gap of more
 * than 0.35 of an orbit modulo a half (unless forced), a map that reaches beyond the data.
 *
 * @example
 * ```ts
 * import { checkTrail } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const trail = { sampling, flux: Float64Array.of(0), error: Float64Array.of(1) };
 * assertThrows(() => checkTrail(trail, { pixels: 101, half_width_kms: 500, systemic_kms: 0 }));
 * ```
 */
export function checkTrail(trail: TrailSamples, options: CheckTrailOptions): Warning[] {
  const action = "make velocity map";
  const { half_width_kms, systemic_kms, force = false } = options;
  const { sampling, flux, error } = trail;
  checkMapShape(options);
  const velocity = shiftVelocities(sampling.velocity_kms, systemFrame(systemic_kms));
  const phases: number[] = [], reaches: number[] = [];
  for (let i = 0; i < sampling.count; i++) {
    let low = Infinity, high = -Infinity;
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!(error[k]! > 0)) {
        throw new InputError({
          action,
          rule: `errors must be positive (infinite where masked), in exposure ${i + 1} too`,
          value: error[k],
          remedy: "mask the sample, or give the noise of the data",
        });
      }
      if (error[k] === Infinity) continue;
      if (!Number.isFinite(flux[k]!)) {
        throw new InputError({
          action,
          rule: `unmasked samples must be numbers, in exposure ${i + 1} too`,
          value: flux[k],
        });
      }
      low = Math.min(low, velocity[k]!);
      high = Math.max(high, velocity[k]!);
    }
    if (low > high) continue;
    phases.push(sampling.phase[i]!);
    reaches.push(Math.min(-low, high));
  }
  if (phases.length < 3) {
    throw new InputError({
      action,
      rule: "at least three exposures must have unmasked samples",
      value: phases.length,
    });
  }
  const reach = median(reaches);
  if (half_width_kms > reach) {
    throw new InputError({
      action,
      rule: `a map must not reach beyond the data, which end ${
        reach.toFixed(0)
      } km/s from the systemic velocity`,
      value: half_width_kms,
      unit: "km/s",
      key: "map.half_width_kms",
      remedy: "make the map smaller, or lines.reach_kms larger",
    });
  }
  const gap = largestHalfOrbitGap(Float64Array.from(phases));
  if (gap <= LARGEST_GAP) return [];
  if (!force) {
    throw new InputError({
      action,
      rule: `phases must leave no gap over ${LARGEST_GAP} modulo half an orbit`,
      value: Number(gap.toFixed(3)),
      unit: "cycles",
      remedy: "observe the missing phases, or pass --force to make the map all the same",
    });
  }
  return [{
    code: "phase-gap",
    text: `Phases leave a gap of ${
      gap.toFixed(2)
    } cycles modulo half an orbit: the map is stretched along the directions not seen.`,
  }];
}
