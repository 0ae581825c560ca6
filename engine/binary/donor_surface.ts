import { InputError } from "../errors.ts";
import { lobeSurface } from "./lobe_surface.ts";
import { rocheGradient } from "./roche_potential.ts";

/** The donor's surface cut into N tiles; lengths in units of the separation, origin the accretor. */
export interface DonorSurface {
  /** Number of tiles, N. */
  readonly count: number;
  /** Centres of the tiles, N × 3 row-major, stride 3: x, y, z. */
  readonly position: Float64Array;
  /** Outward unit normals, N × 3 row-major, stride 3. */
  readonly normal: Float64Array;
  /** Areas, N values, a². */
  readonly area: Float64Array;
  /** Effective gravity (centrifugal part included), N values, G(M1+M2)/a². */
  readonly gravity: Float64Array;
}

/**
 * Tiles of the donor's surface, an equipotential of the Roche potential, in rings about the line of
 * centres: the first ring surrounds L1, the last is the far side. Tiles of all rings span nearly
 * the same angle seen from the donor's centre, so none is thin and the areas are alike.
 *
 * @param mass_ratio q = M2/M1.
 * @param options How fine, how full.
 * @returns The tiles. No tile's centre is L1, where the normal is undefined.
 * @throws {InputError} When the mass ratio is not in (0, 100], the filling not in (0, 1], or the
 * rings fewer than 2.
 *
 * @example The tiles enclose the lobe's volume
 * ```ts
 * import { donorSurface, lobeRadius } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { count, position, normal, area } = donorSurface(0.3, { rings: 60 });
 * let volume = 0;
 * for (let k = 0; k < count; k++) {
 *   const outwards = (position[3 * k]! - 1) * normal[3 * k]! +
 *     position[3 * k + 1]! * normal[3 * k + 1]! + position[3 * k + 2]! * normal[3 * k + 2]!;
 *   volume += outwards * area[k]! / 3;
 * }
 * assertAlmostEquals(Math.cbrt(3 * volume / (4 * Math.PI)) / lobeRadius(0.3), 1, 1e-3);
 * ```
 */
export function donorSurface(mass_ratio: number, options: {
  /** Number of rings from L1 to the far side; the tiles number about 4/π rings². @default {30} */
  readonly rings?: number;
  /** Radius towards L1 over the lobe's own: 1 fills the lobe. @default {1} */
  readonly filling?: number;
} = {}): DonorSurface {
  const { rings = 30, filling = 1 } = options;
  if (!Number.isInteger(rings) || rings < 2) {
    throw new InputError({
      action: "tile donor",
      rule: "the number of rings must be a whole number of at least 2",
      value: rings,
    });
  }
  if (!(filling > 0 && filling <= 1)) {
    throw new InputError({
      action: "tile donor",
      rule: "the filling (radius towards L1 over the lobe's) must be above 0 and at most 1",
      value: filling,
    });
  }
  const lobe = lobeSurface(mass_ratio, { filling });
  const position: number[] = [];
  const normal: number[] = [];
  const area: number[] = [];
  const gravity: number[] = [];
  for (let ring = 0; ring < rings; ring++) {
    const low = Math.PI * ring / rings;
    const high = Math.PI * (ring + 1) / rings;
    const theta = (low + high) / 2;
    const around = Math.max(4, Math.round(2 * rings * Math.sin(theta)));
    const solid_angle = (Math.cos(low) - Math.cos(high)) * 2 * Math.PI / around;
    for (let k = 0; k < around; k++) {
      const psi = 2 * Math.PI * (k + 0.5) / around;
      const direction = [
        -Math.cos(theta),
        Math.sin(theta) * Math.cos(psi),
        Math.sin(theta) * Math.sin(psi),
      ] as const;
      const r = lobe.radius(direction);
      const x = 1 + r * direction[0], y = r * direction[1], z = r * direction[2];
      const [gx, gy, gz] = rocheGradient({ x, y, z }, mass_ratio);
      const pull = Math.hypot(gx, gy, gz);
      const facing = (gx * direction[0] + gy * direction[1] + gz * direction[2]) / pull;
      position.push(x, y, z);
      normal.push(gx / pull, gy / pull, gz / pull);
      area.push(r * r * solid_angle / facing);
      gravity.push(pull);
    }
  }
  return {
    count: area.length,
    position: Float64Array.from(position),
    normal: Float64Array.from(normal),
    area: Float64Array.from(area),
    gravity: Float64Array.from(gravity),
  };
}
