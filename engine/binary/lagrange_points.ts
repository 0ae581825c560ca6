import { findRoot } from "../numerics/mod.ts";
import { requireMassRatio } from "./mass_ratio_rule.ts";
import { rocheGradient, rochePotential } from "./roche_potential.ts";

/** The three Lagrangian points on the line of centres. */
export interface LagrangePoints {
  /** Inner point, between the stars: distance from the accretor towards the donor, a. */
  readonly l1_over_a: number;
  /** Point beyond the donor: distance from the accretor towards the donor, a. */
  readonly l2_over_a: number;
  /** Point beyond the accretor, on the side away from the donor: a, negative. */
  readonly l3_over_a: number;
  /** Roche potential at the inner point, in units of G(M1+M2)/a. */
  readonly l1_potential: number;
}

/**
 * The Lagrangian points on the line of centres, where the gradient of the Roche potential vanishes.
 * "L2" is the one beyond the donor and "L3" the one beyond the accretor, whichever is heavier.
 *
 * @param mass_ratio q = M2/M1.
 * @returns Their places, in units of the separation, from the accretor towards the donor.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example Equal stars
 * ```ts
 * import { lagrangePoints } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { l1_over_a, l2_over_a, l3_over_a } = lagrangePoints(1);
 * assertAlmostEquals(l1_over_a, 0.5, 1e-14);
 * assertAlmostEquals(l2_over_a - 0.5, 0.5 - l3_over_a, 1e-13);
 * ```
 */
export function lagrangePoints(mass_ratio: number): LagrangePoints {
  requireMassRatio(mass_ratio, "find Lagrangian points");
  const slope = (x: number) => rocheGradient({ x, y: 0 }, mass_ratio)[0];
  const tolerance = 1e-16;
  const near = 1e-6; // the slope diverges at the two centres themselves
  const l1_over_a = findRoot(slope, [near, 1 - near], { tolerance });
  return {
    l1_over_a,
    l2_over_a: findRoot(slope, [1 + near, 3], { tolerance }),
    l3_over_a: findRoot(slope, [-3, -near], { tolerance }),
    l1_potential: rochePotential({ x: l1_over_a, y: 0 }, mass_ratio),
  };
}
