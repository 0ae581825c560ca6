/** A place in the frame that turns with the binary, in units of the separation a. */
export interface Place {
  /** From the accretor's centre towards the donor, a. */
  readonly x: number;
  /** Along the donor's orbital motion, a. */
  readonly y: number;
  /** Along the orbital axis, a; 0 in the orbital plane. @default {0} */
  readonly z?: number;
}

/**
 * Share of the donor in the total mass, μ = q/(1+q): in units of the separation also the distance
 * from the accretor to the centre of mass.
 *
 * @param mass_ratio q = M2/M1, donor over accretor, positive.
 * @returns μ in (0, 1).
 *
 * @example
 * ```ts
 * import { donorMassFraction } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(donorMassFraction(0.25), 0.2);
 * ```
 */
export function donorMassFraction(mass_ratio: number): number {
  return mass_ratio / (1 + mass_ratio);
}

/**
 * Roche potential of two point masses on a circular orbit, in the frame that turns with them
 * (Kopal 1959, *Close Binary Systems*): Φ = −(1−μ)/r₁ − μ/r₂ − ((x−μ)² + y²)/2, in units in which
 * the separation, G(M1+M2) and the orbital angular speed are 1.
 *
 * @param place Where, in units of the separation, origin at the accretor.
 * @param mass_ratio q = M2/M1.
 * @returns Potential, dimensionless and negative.
 *
 * @example Equal stars have the inner Lagrangian point half-way, where the potential is −2
 * ```ts
 * import { rochePotential } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(rochePotential({ x: 0.5, y: 0 }, 1), -2, 1e-15);
 * ```
 */
export function rochePotential(place: Place, mass_ratio: number): number {
  const { x, y, z = 0 } = place;
  const mu = donorMassFraction(mass_ratio);
  const to_accretor = Math.hypot(x, y, z);
  const to_donor = Math.hypot(x - 1, y, z);
  return -(1 - mu) / to_accretor - mu / to_donor - ((x - mu) ** 2 + y * y) / 2;
}

/**
 * Gradient of the Roche potential. Its negative is the effective gravity, centrifugal part
 * included; its length on the donor's surface is the gravity of gravity darkening.
 *
 * @param place Where, in units of the separation, origin at the accretor.
 * @param mass_ratio q = M2/M1.
 * @returns ∂Φ/∂x, ∂Φ/∂y, ∂Φ/∂z in units of G(M1+M2)/a².
 *
 * @example It vanishes half-way between equal stars
 * ```ts
 * import { rocheGradient } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(rocheGradient({ x: 0.5, y: 0 }, 1), [0, 0, 0]);
 * ```
 */
export function rocheGradient(
  place: Place,
  mass_ratio: number,
): readonly [x: number, y: number, z: number] {
  const { x, y, z = 0 } = place;
  const mu = donorMassFraction(mass_ratio);
  const accretor = (1 - mu) / (x * x + y * y + z * z) ** 1.5;
  const donor = mu / ((x - 1) ** 2 + y * y + z * z) ** 1.5;
  return [
    accretor * x + donor * (x - 1) - (x - mu),
    (accretor + donor - 1) * y,
    (accretor + donor) * z,
  ];
}
