/**
 * Physical constants, each with unit, uncertainty and source. The exact and the nominal ones have
 * no uncertainty.
 *
 * Masses in suns always come from the nominal product {@linkcode SOLAR_MASS_PARAMETER_M3_S2}: the
 * constant of gravitation on its own is known to 2e-5 only.
 *
 * @module
 */

/** A number of nature (or of a resolution), with its pedigree. */
export interface Constant {
  /** The number, in `unit`. */
  readonly value: number;
  /** Its unit. */
  readonly unit: string;
  /** Standard deviation in the same unit; 0 when exact or nominal. */
  readonly uncertainty: number;
  /** Where it comes from. */
  readonly source: string;
}

/** Speed of light in vacuum, km/s. */
export const SPEED_OF_LIGHT_KMS: Constant = {
  value: 299_792.458,
  unit: "km/s",
  uncertainty: 0,
  source: "exact (SI)",
};

/** Newtonian constant of gravitation, m³ kg⁻¹ s⁻². */
export const GRAVITATION_M3_KG_S2: Constant = {
  value: 6.6743e-11,
  unit: "m3 kg-1 s-2",
  uncertainty: 0.00015e-11,
  source: "CODATA 2018",
};

/** Nominal solar mass parameter GM☉, m³ s⁻². */
export const SOLAR_MASS_PARAMETER_M3_S2: Constant = {
  value: 1.3271244e20,
  unit: "m3 s-2",
  uncertainty: 0,
  source: "IAU 2015 resolution B3, nominal",
};

/** Nominal solar radius, m. */
export const SOLAR_RADIUS_M: Constant = {
  value: 6.957e8,
  unit: "m",
  uncertainty: 0,
  source: "IAU 2015 resolution B3, nominal",
};

/** Astronomical unit, m. */
export const ASTRONOMICAL_UNIT_M: Constant = {
  value: 149_597_870_700,
  unit: "m",
  uncertainty: 0,
  source: "exact (IAU 2012 resolution B2)",
};

/** Day, s. */
export const DAY_S: Constant = {
  value: 86_400,
  unit: "s",
  uncertainty: 0,
  source: "exact (SI)",
};
