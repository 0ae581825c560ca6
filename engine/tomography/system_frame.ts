import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";

const C = SPEED_OF_LIGHT_KMS.value;

/** An affine change of velocity: `offset_kms + factor × velocity`. */
export interface VelocityShift {
  /** Added after scaling, km/s. */
  readonly offset_kms: number;
  /** Multiplies a velocity or a width. */
  readonly factor: number;
}

/** Options of {@linkcode systemFrame}. */
export interface SystemFrameOptions {
  /**
   * Rest wavelength of the component over the rest wavelength that made the velocities, both in
   * vacuum; for the members of a blend.
   *
   * @default {1}
   */
  readonly rest_ratio?: number;
}

/**
 * The change from velocities on the optical convention, V = c (λ/λ0 − 1), barycentric, to
 * velocities in the frame of the binary's centre of mass, v = c ((1 + V/c) / (1 + γ/c) − 1). The
 * systemic velocity is a factor on the wavelength; in V the change is affine, so a uniform grid
 * stays uniform.
 *
 * @param systemic_kms Systemic velocity γ, km/s.
 * @param options Rest wavelength of a blend's member.
 * @returns The shift, to be used by {@linkcode shiftVelocities}.
 * @throws {InputError} When γ is not a finite number below the speed of light.
 *
 * @example A line at γ is at rest in the system's frame
 * ```ts
 * import { systemFrame } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { offset_kms, factor } = systemFrame(150);
 * assertAlmostEquals(offset_kms + factor * 150, 0, 1e-12);
 * ```
 */
export function systemFrame(systemic_kms: number, options: SystemFrameOptions = {}): VelocityShift {
  const { rest_ratio = 1 } = options;
  if (!(Math.abs(systemic_kms) < C)) {
    throw new InputError({
      action: "bring velocities to the system's frame",
      rule: "systemic velocity must be a number below the speed of light",
      value: systemic_kms,
      unit: "km/s",
    });
  }
  if (!(rest_ratio > 0) || !Number.isFinite(rest_ratio)) {
    throw new InputError({
      action: "bring velocities to the system's frame",
      rule: "ratio of rest wavelengths must be positive",
      value: rest_ratio,
    });
  }
  const factor = 1 / (rest_ratio * (1 + systemic_kms / C));
  // C (factor − 1) without the cancellation.
  const offset_kms = -(systemic_kms * rest_ratio + C * (rest_ratio - 1)) * factor;
  return { offset_kms, factor };
}

/**
 * Velocities after a {@linkcode VelocityShift}.
 *
 * @param velocity_kms Velocities, km/s.
 * @param shift The change.
 * @returns New array of the same length.
 *
 * @example
 * ```ts
 * import { shiftVelocities, systemFrame } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const [v = NaN] = shiftVelocities(Float64Array.of(1150), systemFrame(150));
 * assertAlmostEquals(v, 1000 / (1 + 150 / 299792.458), 1e-9);
 * ```
 */
export function shiftVelocities(velocity_kms: Float64Array, shift: VelocityShift): Float64Array {
  return velocity_kms.map((v) => shift.offset_kms + shift.factor * v);
}
