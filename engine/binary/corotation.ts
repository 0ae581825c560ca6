import type { Binary } from "./binary.ts";
import { donorMassFraction, type Place } from "./roche_potential.ts";

/** A velocity in map coordinates: inertial, along axes that turn with the binary. */
export interface MapVelocity {
  /** Towards the donor from the accretor, km/s. */
  readonly vx_kms: number;
  /** Along the donor's orbital motion, km/s. */
  readonly vy_kms: number;
}

/** What turns dimensionless velocities into km/s: a binary's mass ratio and orbital speeds. */
export type Speeds = Pick<Binary, "mass_ratio" | "k_accretor_kms" | "k_donor_kms">;

/**
 * Map coordinates of matter that turns rigidly with the binary: (K1+K2)·(−y, x − q/(1+q)). The
 * donor's centre comes out at (0, +K2), the accretor's at (0, −K1).
 *
 * @param place Where, in units of the separation, origin at the accretor.
 * @param binary The binary.
 * @returns Projected velocity, km/s.
 *
 * @example
 * ```ts
 * import { corotationVelocity } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * assertAlmostEquals(corotationVelocity({ x: 1, y: 0 }, speeds).vy_kms, 320, 1e-12);
 * assertAlmostEquals(corotationVelocity({ x: 0, y: 0 }, speeds).vy_kms, -80, 1e-12);
 * ```
 */
export function corotationVelocity(place: Place, binary: Speeds): MapVelocity {
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  return {
    vx_kms: sum * (0 - place.y),
    vy_kms: sum * (place.x - donorMassFraction(binary.mass_ratio)),
  };
}

/**
 * Place in the orbital plane at which matter that turns with the binary has a given velocity: the
 * inverse of {@linkcode corotationVelocity}.
 *
 * @param velocity Map coordinates, km/s.
 * @param binary The binary.
 * @returns Place in units of the separation, origin at the accretor.
 *
 * @example
 * ```ts
 * import { corotationPlace } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * assertAlmostEquals(corotationPlace({ vx_kms: 0, vy_kms: 320 }, speeds).x, 1, 1e-15);
 * ```
 */
export function corotationPlace(velocity: MapVelocity, binary: Speeds): Place {
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  return {
    x: velocity.vy_kms / sum + donorMassFraction(binary.mass_ratio),
    y: (0 - velocity.vx_kms) / sum,
  };
}
