import { z } from "zod";
import { nonNegative, number, positive, range } from "./common.ts";

/** `[binary]`: what is known of the two stars, for overlays, model and masses. */
export interface BinarySettings {
  /** Projected orbital speed of the accretor, km/s. */
  readonly k_accretor_kms?: number;
  /** Its standard deviation, km/s. */
  readonly k_accretor_error_kms?: number;
  /** Projected orbital speed of the donor, km/s. */
  readonly k_donor_kms?: number;
  /** Its standard deviation, km/s. */
  readonly k_donor_error_kms?: number;
  /** q = M2/M1, donor over accretor. */
  readonly mass_ratio?: number;
  /** Its standard deviation. */
  readonly mass_ratio_error?: number;
  /** Inclination, degrees. */
  readonly inclination_deg?: number;
  /** Its standard deviation, degrees. */
  readonly inclination_error_deg?: number;
  /** Range of inclination where only that is known, degrees. */
  readonly inclination_range_deg?: readonly [number, number];
  /** Full width of the eclipse of the accretor's centre, cycles. */
  readonly eclipse_width_cycles?: number;
  /** Its standard deviation, cycles. */
  readonly eclipse_width_error_cycles?: number;
  /** Superhump period over orbital period, less one. */
  readonly superhump_excess?: number;
  /** Its standard deviation. */
  readonly superhump_excess_error?: number;
  /** Angle up to which the disc shadows the donor, degrees. */
  readonly disc_shadow_deg?: number;
  /** Mass of the accretor, solar. */
  readonly mass_accretor_msun?: number;
  /** Mass of the donor, solar. */
  readonly mass_donor_msun?: number;
  /** Separation of the centres, solar radii. */
  readonly separation_rsun?: number;
  /** Kind of accretor. */
  readonly accretor: "white-dwarf" | "neutron-star" | "black-hole";
}

/** Schema of BinarySettings. */
export const binarySection: z.ZodType<BinarySettings> = z.strictObject({
  k_accretor_kms: positive.optional(),
  k_accretor_error_kms: nonNegative.optional(),
  k_donor_kms: positive.optional(),
  k_donor_error_kms: nonNegative.optional(),
  mass_ratio: positive.optional(),
  mass_ratio_error: nonNegative.optional(),
  inclination_deg: number.gt(0).lte(90).optional(),
  inclination_error_deg: nonNegative.optional(),
  inclination_range_deg: range.optional(),
  eclipse_width_cycles: positive.optional(),
  eclipse_width_error_cycles: nonNegative.optional(),
  superhump_excess: positive.optional(),
  superhump_excess_error: nonNegative.optional(),
  disc_shadow_deg: number.gte(0).lt(60).optional(),
  mass_accretor_msun: positive.optional(),
  mass_donor_msun: positive.optional(),
  separation_rsun: positive.optional(),
  accretor: z.enum(["white-dwarf", "neutron-star", "black-hole"]).default("white-dwarf"),
});
