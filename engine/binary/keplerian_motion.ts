import { InputError } from "../errors.ts";
import type { MapVelocity, Speeds } from "./corotation.ts";
import { donorMassFraction, type Place } from "./roche_potential.ts";

/** Throws unless a length or speed is positive. */
function requirePositive(value: number, what: string, unit: string): void {
  if (value > 0 && Number.isFinite(value)) return;
  throw new InputError({
    action: "convert between disc radius and velocity",
    rule: `the ${what} must be positive`,
    value,
    unit,
  });
}

/**
 * Projected speed of a circular Keplerian orbit about the accretor: (K1+K2)·√(a / (r(1+q))).
 *
 * Use it with care for the outer disc: where a radius can be had otherwise, rims of discs are seen
 * to move 10–15 % slower than this (Wade & Horne 1988, ApJ 324, 411), so that a radius read off a
 * double peak's separation comes out a fifth to a third too large.
 *
 * @param radius_over_a Distance from the accretor, in units of the separation.
 * @param binary The binary.
 * @returns Speed relative to the accretor, km/s, times the sine of the inclination.
 * @throws {InputError} When the radius is not positive.
 *
 * @example
 * ```ts
 * import { keplerianSpeed } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * assertAlmostEquals(keplerianSpeed(0.2, speeds), 800, 1e-9);
 * ```
 */
export function keplerianSpeed(radius_over_a: number, binary: Speeds): number {
  requirePositive(radius_over_a, "disc radius", "a");
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  return sum * Math.sqrt((1 - donorMassFraction(binary.mass_ratio)) / radius_over_a);
}

/**
 * Radius at which a circular Keplerian orbit about the accretor has a given projected speed: the
 * inverse of {@linkcode keplerianSpeed}, with the same caveat. Half the separation of a double
 * peak gives an outer radius that is an upper limit rather than a measurement.
 *
 * @param speed_kms Speed relative to the accretor, km/s, times the sine of the inclination.
 * @param binary The binary.
 * @returns Radius in units of the separation.
 * @throws {InputError} When the speed is not positive.
 *
 * @example
 * ```ts
 * import { keplerianRadius } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * assertAlmostEquals(keplerianRadius(800, speeds), 0.2, 1e-12);
 * ```
 */
export function keplerianRadius(speed_kms: number, binary: Speeds): number {
  requirePositive(speed_kms, "speed", "km/s");
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  return (1 - donorMassFraction(binary.mass_ratio)) * (sum / speed_kms) ** 2;
}

/**
 * Map coordinates of matter on a circular Keplerian orbit about the accretor, at a place in the
 * orbital plane: its speed along (−y, x)/r, plus the accretor's own (0, −K1).
 *
 * @param place Where, in units of the separation, origin at the accretor.
 * @param binary The binary.
 * @returns Projected velocity, km/s.
 * @throws {InputError} When the place is the accretor's centre.
 *
 * @example
 * ```ts
 * import { keplerianVelocity } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * const { vx_kms, vy_kms } = keplerianVelocity({ x: 0.2, y: 0 }, speeds);
 * assertAlmostEquals(vx_kms, 0, 1e-9);
 * assertAlmostEquals(vy_kms, 800 - 80, 1e-9);
 * ```
 */
export function keplerianVelocity(place: Place, binary: Speeds): MapVelocity {
  const r = Math.hypot(place.x, place.y);
  const speed = keplerianSpeed(r, binary);
  return {
    vx_kms: speed * (0 - place.y) / r,
    vy_kms: speed * place.x / r - binary.k_accretor_kms,
  };
}
