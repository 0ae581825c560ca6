import { lagrangePoints } from "./lagrange_points.ts";
import { donorMassFraction } from "./roche_potential.ts";

/** A unit vector: components towards +x, +y, +z. */
export type Direction = readonly [x: number, y: number, z: number];

/** The critical surface about one star, as a radius in every direction. */
export interface LobeSurface {
  /** Centre of the star on the x axis: 1 for the donor, 0 for the accretor. */
  readonly centre: 0 | 1;
  /** Distance from the centre to the inner Lagrangian point, a. */
  readonly l1_distance: number;
  /** Distance from the centre to the surface in the direction of a unit vector, a. */
  radius(direction: Direction): number;
}

/** Which star's lobe is meant. */
export type Star = "donor" | "accretor";

/**
 * The critical surface Φ = Φ(L1) about a star. `filling` below 1 gives the inner equipotential
 * whose radius towards L1 is that fraction of the lobe's.
 *
 * @param mass_ratio q = M2/M1.
 * @param options Which star, and how full.
 * @returns A function of direction.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example The surface reaches L1
 * ```ts
 * import { lagrangePoints, lobeSurface } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const lobe = lobeSurface(0.3);
 * assertAlmostEquals(lobe.radius([-1, 0, 0]), 1 - lagrangePoints(0.3).l1_over_a, 1e-12);
 * ```
 */
export function lobeSurface(
  mass_ratio: number,
  options: {
    /** @default {"donor"} */
    readonly star?: Star;
    /** Radius towards L1 over the lobe's. @default {1} */
    readonly filling?: number;
  } = {},
): LobeSurface {
  const { star = "donor", filling = 1 } = options;
  const { l1_over_a, l1_potential } = lagrangePoints(mass_ratio);
  const mu = donorMassFraction(mass_ratio);
  const own = star === "donor" ? mu : 1 - mu;
  const centre = star === "donor" ? 1 : 0;
  const other = 1 - centre;
  const l1_distance = Math.abs(l1_over_a - centre);

  // Potential and its slope along a ray, from the star's centre outwards.
  const alongRay = ([dx, dy, dz]: Direction, s: number): [number, number] => {
    const x = centre + s * dx, y = s * dy, z = s * dz;
    const far = (x - other) ** 2 + y * y + z * z;
    const distance = Math.sqrt(far);
    const value = -own / s - (1 - own) / distance - ((x - mu) ** 2 + y * y) / 2;
    const outwards = (x - other) * dx + y * dy + z * dz;
    const slope = own / (s * s) + (1 - own) * outwards / (far * distance) -
      ((x - mu) * dx + y * dy);
    return [value, slope];
  };
  const towards_l1: Direction = [centre === 1 ? -1 : 1, 0, 0];
  const level = filling === 1 ? l1_potential : alongRay(towards_l1, filling * l1_distance)[0];

  return {
    centre,
    l1_distance,
    radius(direction) {
      const reach = filling * l1_distance;
      // Straight at L1 the slope vanishes on the surface, where Newton's steps would stall.
      if (direction[0] * towards_l1[0] >= 1) return reach;
      let low = 1e-6 * reach;
      let high = reach;
      let s = 0.8 * reach;
      for (let k = 0; k < 100; k++) {
        const [value, slope] = alongRay(direction, s);
        if (value < level) low = s;
        else high = s;
        const newton = s - (value - level) / slope;
        const next = newton > low && newton < high ? newton : (low + high) / 2;
        if (Math.abs(next - s) < 1e-15 * reach || high - low < 1e-15 * reach) return next;
        s = next;
      }
      return s;
    },
  };
}
