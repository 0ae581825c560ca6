import { InputError } from "../errors.ts";
import { corotationVelocity, type Speeds } from "./corotation.ts";
import { lobeSurface, type Star } from "./lobe_surface.ts";

/** A closed curve in the orbital plane; the first point is not repeated. */
export interface LobeOutline {
  /** N values, a, from the accretor towards the donor. */
  readonly x: Float64Array;
  /** N values, a, along the donor's orbital motion. */
  readonly y: Float64Array;
}

/** A closed curve in the velocity map; the first point is not repeated. */
export interface VelocityOutline {
  /** N values, km/s. */
  readonly vx_kms: Float64Array;
  /** N values, km/s. */
  readonly vy_kms: Float64Array;
}

/**
 * Outline of a Roche lobe in the orbital plane. Point k lies at the angle 2πk/N about the star's
 * centre, from +x towards +y; for the donor point N/2 is L1 (N even), for the accretor point 0 is.
 *
 * @param mass_ratio q = M2/M1.
 * @param options Which star, how many points.
 * @returns The curve, in units of the separation, origin at the accretor.
 * @throws {InputError} When the mass ratio is not in (0, 100] or the points are fewer than 3.
 *
 * @example
 * ```ts
 * import { lagrangePoints, lobeOutline } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { x } = lobeOutline(0.2, { points: 32 });
 * assertAlmostEquals(x[16]!, lagrangePoints(0.2).l1_over_a, 1e-14);
 * ```
 */
export function lobeOutline(mass_ratio: number, options: {
  /** @default {"donor"} */
  readonly star?: Star;
  /** Number of points. @default {360} */
  readonly points?: number;
} = {}): LobeOutline {
  const { star = "donor", points = 360 } = options;
  if (!Number.isInteger(points) || points < 3) {
    throw new InputError({
      action: "draw lobe",
      rule: "the number of points must be a whole number of at least 3",
      value: points,
    });
  }
  const lobe = lobeSurface(mass_ratio, { star });
  const x = new Float64Array(points);
  const y = new Float64Array(points);
  for (let k = 0; k < points; k++) {
    const turn = k / points;
    // The line of centres exactly, so that L1 is hit and not missed by a rounding error.
    const sine = turn === 0 || turn === 0.5 ? 0 : Math.sin(2 * Math.PI * turn);
    const cosine = turn === 0.5 ? -1 : Math.cos(2 * Math.PI * turn);
    const r = lobe.radius([cosine, sine, 0]);
    x[k] = lobe.centre + r * cosine;
    y[k] = r * sine;
  }
  return { x, y };
}

/**
 * Outline of a Roche lobe in the velocity map: its surface in the orbital plane, turning with the
 * binary. Only the donor's matter truly moves like that; the accretor's lobe is drawn for
 * orientation.
 *
 * @param binary The binary.
 * @param options Which star, how many points.
 * @returns The curve in map coordinates, km/s.
 * @throws {InputError} When the mass ratio is not in (0, 100] or the points are fewer than 3.
 *
 * @example Both curves meet at L1
 * ```ts
 * import { lobeOutlineVelocity } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * const donor = lobeOutlineVelocity(speeds, { points: 16 });
 * const accretor = lobeOutlineVelocity(speeds, { star: "accretor", points: 16 });
 * assertAlmostEquals(donor.vy_kms[8]!, accretor.vy_kms[0]!, 1e-10);
 * ```
 */
export function lobeOutlineVelocity(binary: Speeds, options: {
  /** @default {"donor"} */
  readonly star?: Star;
  /** Number of points. @default {360} */
  readonly points?: number;
} = {}): VelocityOutline {
  const { x, y } = lobeOutline(binary.mass_ratio, options);
  const velocities = Array.from(x, (at, k) => corotationVelocity({ x: at, y: y[k]! }, binary));
  return {
    vx_kms: Float64Array.from(velocities, (v) => v.vx_kms),
    vy_kms: Float64Array.from(velocities, (v) => v.vy_kms),
  };
}
