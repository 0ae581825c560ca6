import { DAY_S, GRAVITATION_M3_KG_S2 } from "../constants.ts";
import { lobeRadius } from "./lobe_radius.ts";
import { donorMassFraction } from "./roche_potential.ts";

/**
 * Mean density of a donor that fills its Roche lobe: 3π·μ / (G·P²·(R2/a)³), μ = q/(1+q). It hardly
 * depends on the mass ratio: the period alone tells the kind of donor.
 *
 * @param period_d Orbital period, d.
 * @param mass_ratio q = M2/M1.
 * @param options The lobe's radius to be used.
 * @returns Density, g/cm³.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example About 110 over the square of the period in hours (Frank, King & Raine)
 * ```ts
 * import { donorDensity } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(donorDensity(4 / 24, 0.6) / (110 / 16), 1, 0.05);
 * ```
 */
export function donorDensity(period_d: number, mass_ratio: number, options: {
  /** Radius of the lobe, a. @default {lobeRadius(mass_ratio)} */
  readonly lobe_radius_over_a?: number;
} = {}): number {
  const { lobe_radius_over_a = lobeRadius(mass_ratio) } = options;
  const seconds = period_d * DAY_S.value;
  const big_g = GRAVITATION_M3_KG_S2.value;
  const si = 3 * Math.PI * donorMassFraction(mass_ratio) /
    (big_g * seconds ** 2 * lobe_radius_over_a ** 3);
  return si / 1000;
}
