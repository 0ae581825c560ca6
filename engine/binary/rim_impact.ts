import { ballisticStream } from "./ballistic_stream.ts";
import type { MapVelocity, Speeds } from "./corotation.ts";
import type { Place } from "./roche_potential.ts";

/** Where the stream meets the rim of a disc, and how fast things move there. */
export interface RimImpact {
  /** Radius of the rim, in units of the separation. */
  readonly radius_over_a: number;
  /** Place in the orbital plane, a, origin at the accretor. */
  readonly place: Place;
  /** Angle of the place as seen from the accretor, from the donor towards its motion, degrees. */
  readonly azimuth_deg: number;
  /** Velocity of the stream there, map coordinates. */
  readonly stream: MapVelocity;
  /** Keplerian velocity of the disc there, map coordinates. */
  readonly keplerian: MapVelocity;
  /** Projected speed at which stream and disc collide, km/s. */
  readonly collision_kms: number;
}

/**
 * Impact of the ballistic stream on a circular rim. A bright spot in a velocity map lies at the
 * stream's velocity, at the disc's, or between them.
 *
 * @param radius_over_a Radius of the rim, in units of the separation.
 * @param binary The binary.
 * @returns Place and velocities.
 * @throws {InputError} When the stream does not reach the radius or it lies beyond L1.
 *
 * @example
 * ```ts
 * import { rimImpact } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * const { place, stream } = rimImpact(0.3, speeds);
 * assertAlmostEquals(Math.hypot(place.x, place.y), 0.3, 1e-9);
 * assertAlmostEquals(Math.sign(stream.vx_kms), -1); // upper left of the map
 * ```
 */
export function rimImpact(radius_over_a: number, binary: Speeds): RimImpact {
  const { points } = ballisticStream(binary.mass_ratio, { radii_over_a: [radius_over_a] });
  const point = points[0]!;
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  return {
    radius_over_a,
    place: { x: point.x, y: point.y },
    azimuth_deg: Math.atan2(point.y, point.x) * 180 / Math.PI,
    stream: { vx_kms: sum * point.vx, vy_kms: sum * point.vy },
    keplerian: { vx_kms: sum * point.keplerian_vx, vy_kms: sum * point.keplerian_vy },
    collision_kms: sum *
      Math.hypot(point.vx - point.keplerian_vx, point.vy - point.keplerian_vy),
  };
}
