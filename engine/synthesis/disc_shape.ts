import { integrate } from "./quadrature.ts";

/** A Keplerian disc as a shape without units: radii in units of its outer radius. */
export interface DiscShape {
  /** Inner over outer radius, in (0, 1). */
  readonly inner_over_outer: number;
  /** β of the emissivity per unit area j(r) ∝ r^−β. */
  readonly emissivity_index: number;
  /**
   * κ of the surface brightness of optically thick lines, ∝ [1 + κ² sin²θ cos²θ]^½ with θ the
   * azimuth from the observer's direction; 0 for optically thin ones. See
   * {@linkcode shearStrength}.
   * @default {0}
   */
  readonly shear?: number;
}

/**
 * Strength of shear broadening in an optically thick disc, κ = k sin i tan i (Horne & Marsh 1986,
 * MNRAS 218, 761). The coefficient k depends on how height and local width are defined: 2 is the
 * value usually quoted from that paper (from memory), 3/2 follows from the line-of-sight gradient of
 * a Keplerian flow across a layer whose height is its local width over the angular speed.
 *
 * @param inclination_deg Inclination i, degrees, in [0, 90).
 * @param coefficient k, dimensionless.
 * @returns κ, dimensionless.
 *
 * @example
 * ```ts
 * import { shearStrength } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(shearStrength(60, 2), 3, 1e-12);
 * ```
 */
export function shearStrength(inclination_deg: number, coefficient: number): number {
  const i = inclination_deg * Math.PI / 180;
  return coefficient * Math.sin(i) * Math.tan(i);
}

/**
 * ∫ r^(1−β) dr from one radius to another.
 *
 * @param limits Lower and upper radius, positive.
 * @param emissivity_index β.
 * @returns The integral, in the unit of radius to the power 2 − β.
 *
 * @example
 * ```ts
 * import { radialLight } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(radialLight([0.1, 1], 1), 0.9, 1e-15);
 * assertAlmostEquals(radialLight([0.1, 1], 2), Math.log(10), 1e-15);
 * ```
 */
export function radialLight(
  limits: readonly [low: number, high: number],
  emissivity_index: number,
): number {
  const [low, high] = limits;
  const power = 2 - emissivity_index;
  if (Math.abs(power) < 1e-9) return Math.log(high / low);
  return (high ** power - low ** power) / power;
}

/**
 * Mean over azimuth of the surface brightness of an optically thick disc, [1 + κ² sin²θ cos²θ]^½.
 *
 * @param shear κ.
 * @returns Mean, 1 for κ = 0.
 *
 * @example
 * ```ts
 * import { shearMean } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(shearMean(0), 1, 1e-14);
 * assertAlmostEquals(shearMean(100), 100 / Math.PI, 0.1); // |sin θ cos θ| has the mean 1/π
 * ```
 */
export function shearMean(shear: number): number {
  if (shear === 0) return 1;
  const brightness = (theta: number) => Math.hypot(1, shear * Math.sin(theta) * Math.cos(theta));
  // Even about 45 degrees; nearly a kink at 0 when κ is large, hence panels growing from there.
  let sum = 0;
  let low = 0;
  for (let width = Math.PI / 4 / 2 ** 8; low < Math.PI / 4 - 1e-12; width = low) {
    sum += integrate(brightness, [low, low + width], { points: 16, panels: 1 });
    low += width;
  }
  return 4 * sum / Math.PI;
}
