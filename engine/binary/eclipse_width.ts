import { InputError } from "../errors.ts";
import { findRoot, minimiseScalar } from "../numerics/mod.ts";
import { lagrangePoints } from "./lagrange_points.ts";
import { rochePotential } from "./roche_potential.ts";

/**
 * How deep the line of sight to the accretor dips into the donor's lobe: lowest potential on it
 * less that of L1; negative when the accretor's centre is hidden.
 */
function clearance(mass_ratio: number, inclination_deg: number, phase: number): number {
  const { l1_over_a, l1_potential } = lagrangePoints(mass_ratio);
  const tilt = inclination_deg * Math.PI / 180;
  const x = Math.sin(tilt) * Math.cos(2 * Math.PI * phase);
  const y = Math.sin(tilt) * Math.sin(2 * Math.PI * phase);
  const z = Math.cos(tilt);
  // The lobe lies within a ball about the donor that touches L1.
  const reach = (1 - l1_over_a) ** 2 - (1 - x * x);
  if (x <= 0 || reach <= 0) return 1 - x;
  const half = Math.sqrt(reach);
  const along = (t: number) => rochePotential({ x: t * x, y: t * y, z: t * z }, mass_ratio);
  return minimiseScalar(along, [x - half, x + half], { tolerance: 1e-10 }).value - l1_potential;
}

/**
 * Full width of the eclipse of the accretor's centre by a donor that fills its Roche lobe (Chanan,
 * Middleditch & Nelson 1976, ApJ 208, 512).
 *
 * @param mass_ratio q = M2/M1.
 * @param inclination_deg Inclination, degrees.
 * @returns Width in cycles; 0 when there is no eclipse.
 * @throws {InputError} When the mass ratio is not in (0, 100] or the inclination not in [0, 90].
 *
 * @example Edge-on, the width is near that of the lobe itself
 * ```ts
 * import { eclipseWidth, lobeRadius } from "@millrace/millrace/binary";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * assertAlmostEquals(eclipseWidth(0.3, 90), Math.asin(lobeRadius(0.3)) / Math.PI, 0.005);
 * assertEquals(eclipseWidth(0.3, 50), 0);
 * ```
 */
export function eclipseWidth(mass_ratio: number, inclination_deg: number): number {
  if (!(inclination_deg >= 0 && inclination_deg <= 90)) {
    throw new InputError({
      action: "compute eclipse width",
      rule: "inclination must be in [0, 90] deg",
      value: inclination_deg,
      unit: "deg",
      key: "inclination_deg",
    });
  }
  const depth = (phase: number) => clearance(mass_ratio, inclination_deg, phase);
  if (depth(0) >= 0) return 0;
  return 2 * findRoot(depth, [0, 0.25], { tolerance: 1e-12 });
}

/**
 * Inclination at which the eclipse of the accretor's centre has a given width: the inverse of
 * {@linkcode eclipseWidth}.
 *
 * @param mass_ratio q = M2/M1.
 * @param width_cycles Full width, cycles.
 * @returns Inclination, degrees.
 * @throws {InputError} When no inclination gives so wide an eclipse.
 *
 * @example
 * ```ts
 * import { eclipseWidth, inclinationFromEclipse } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(inclinationFromEclipse(0.15, eclipseWidth(0.15, 82)), 82, 1e-6);
 * ```
 */
export function inclinationFromEclipse(mass_ratio: number, width_cycles: number): number {
  const widest = eclipseWidth(mass_ratio, 90);
  if (!(width_cycles > 0 && width_cycles <= widest)) {
    throw new InputError({
      action: "find inclination from eclipse width",
      rule: `at mass ratio ${mass_ratio} the width must be above 0 and at most ` +
        `${widest.toFixed(4)} cycles`,
      value: width_cycles,
      unit: "cycles",
      key: "eclipse_width_cycles",
    });
  }
  // Inside the width the half-width's line of sight is hidden edge-on and free face-on.
  const depth = (deg: number) => clearance(mass_ratio, deg, width_cycles / 2);
  const edge_on = depth(90);
  return edge_on >= 0 ? 90 : findRoot(depth, [1, 90], { tolerance: 1e-9 });
}
