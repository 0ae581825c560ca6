/** Kind of accreting star. */
export type AccretorKind = "white-dwarf" | "neutron-star" | "black-hole";

/**
 * A circular binary as a geometry: mass ratio and the projected orbital speeds. What is not known
 * is null; functions that need it say so.
 */
export interface Binary {
  /** q = M2/M1, donor over accretor. */
  readonly mass_ratio: number;
  /** Projected orbital speed of the accretor, km/s. */
  readonly k_accretor_kms: number;
  /** Projected orbital speed of the donor, km/s. */
  readonly k_donor_kms: number;
  /** Inclination, degrees; null when unknown. */
  readonly inclination_deg: number | null;
  /** Orbital period, d; null when unknown. */
  readonly period_d: number | null;
  /** Mass of the accretor, solar; null when unknown. */
  readonly mass_accretor_msun: number | null;
  /** Mass of the donor, solar; null when unknown. */
  readonly mass_donor_msun: number | null;
  /** Separation of the two centres, solar radii; null when unknown. */
  readonly separation_rsun: number | null;
  /** Kind of accretor. */
  readonly accretor: AccretorKind;
}
