import { type BallisticStream, ballisticStream } from "./ballistic_stream.ts";
import { lagrangePoints } from "./lagrange_points.ts";
import { requireMassRatio } from "./mass_ratio_rule.ts";
import { donorMassFraction } from "./roche_potential.ts";

/**
 * Radius of the circular orbit about the accretor that has the angular momentum which the *stream*
 * brings, taken at its closest approach: h²/(GM1). It is the one to draw; the estimate from L1,
 * {@linkcode circularisationRadiusFromL1}, is 20 to 50 % larger.
 *
 * @param stream The stream.
 * @returns Radius in units of the separation.
 *
 * @example
 * ```ts
 * import { ballisticStream, circularisationRadius } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // Warner's (1995) fit, good to one per cent here
 * const radius = circularisationRadius(ballisticStream(0.25));
 * assertAlmostEquals(radius, 0.0859 * 0.25 ** -0.426, 0.002);
 * ```
 */
export function circularisationRadius(stream: BallisticStream): number {
  return stream.closest.angular_momentum ** 2 / (1 - donorMassFraction(stream.mass_ratio));
}

/**
 * Radius of the circular orbit about the accretor that has the angular momentum of matter at rest
 * at L1: (1+q)·(x_L1)⁴, with the exact L1. This is the "circularisation radius" of textbooks; on
 * its way the stream loses part of that angular momentum to the orbit.
 *
 * @param mass_ratio q = M2/M1.
 * @returns Radius in units of the separation.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { circularisationRadiusFromL1 } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(circularisationRadiusFromL1(1), 2 * 0.5 ** 4, 1e-14);
 * ```
 */
export function circularisationRadiusFromL1(mass_ratio: number): number {
  return (1 + mass_ratio) * lagrangePoints(mass_ratio).l1_over_a ** 4;
}

/**
 * Radius at which tides cut off a disc, 0.60/(1+q), a fit for 0.03 < q < 1 to the last orbits that
 * do not cross (Paczyński 1977, ApJ 216, 822; the fit in Warner 1995, *Cataclysmic Variable
 * Stars*, eq. 2.61, from memory).
 *
 * @param mass_ratio q = M2/M1.
 * @returns Radius in units of the separation; null outside the fit's range.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { tidalRadius } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(tidalRadius(0.2), 0.5);
 * assertEquals(tidalRadius(2), null);
 * ```
 */
export function tidalRadius(mass_ratio: number): number | null {
  requireMassRatio(mass_ratio, "compute tidal radius");
  return mass_ratio > 0.03 && mass_ratio < 1 ? 0.6 / (1 + mass_ratio) : null;
}

/**
 * Radius at which a Keplerian orbit about the accretor is three times as fast as the binary,
 * 3^(−⅔)·(1+q)^(−⅓): the resonance held responsible for superhumps where it fits inside the tidal
 * radius (Whitehurst & King 1991, MNRAS 249, 25).
 *
 * @param mass_ratio q = M2/M1.
 * @returns Radius in units of the separation.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { keplerianSpeed, resonanceRadius } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.1, k_accretor_kms: 50, k_donor_kms: 500 };
 * const radius = resonanceRadius(0.1);
 * const turns = keplerianSpeed(radius, speeds) / 550 / radius;
 * assertAlmostEquals(turns, 3, 1e-12);
 * ```
 */
export function resonanceRadius(mass_ratio: number): number {
  requireMassRatio(mass_ratio, "compute resonance radius");
  return 3 ** (-2 / 3) * (1 + mass_ratio) ** (-1 / 3);
}

/**
 * Closest approach of the ballistic stream to the accretor: a disc, or an accretor, smaller than
 * this is missed by the stream.
 *
 * @param mass_ratio q = M2/M1.
 * @returns Distance in units of the separation.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { closestApproach } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // Warner's (1995) fit, good to 3 per cent
 * assertAlmostEquals(closestApproach(0.5) / (0.0488 * 0.5 ** -0.464), 1, 0.03);
 * ```
 */
export function closestApproach(mass_ratio: number): number {
  return ballisticStream(mass_ratio, { points: 2 }).closest.radius_over_a;
}
