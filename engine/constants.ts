/**
 * Physical constants, each with its unit, uncertainty and source. Masses of stars come from
 * {@linkcode GM_SUN_M3_S2}, never from G times a mass of the Sun: G is known to 2 parts in 100 000 only.
 *
 * @module
 */

/** A physical constant. */
export interface Constant {
  /** Its value in `unit`. */
  readonly value: number;
  /** Unit; empty for a plain number. */
  readonly unit: string;
  /** One standard deviation in `unit`; 0 where the value is exact by definition. */
  readonly uncertainty: number;
  /** Where the value comes from. */
  readonly source: string;
}

/** Speed of light in vacuum, km/s. */
export const SPEED_OF_LIGHT_KMS: Constant = {
  value: 299_792.458,
  unit: "km/s",
  uncertainty: 0,
  source: "SI, exact",
};

/** Nominal GM of the Sun, m³/s². */
export const GM_SUN_M3_S2: Constant = {
  value: 1.327_124_4e20,
  unit: "m3/s2",
  uncertainty: 0,
  source: "IAU 2015 Resolution B3, nominal",
};

/** Nominal radius of the Sun, m. */
export const SOLAR_RADIUS_M: Constant = {
  value: 6.957e8,
  unit: "m",
  uncertainty: 0,
  source: "IAU 2015 Resolution B3, nominal",
};

/** Nominal luminosity of the Sun, W. */
export const SOLAR_LUMINOSITY_W: Constant = {
  value: 3.828e26,
  unit: "W",
  uncertainty: 0,
  source: "IAU 2015 Resolution B3, nominal",
};

/** Nominal GM of the Earth, m³/s². */
export const GM_EARTH_M3_S2: Constant = {
  value: 3.986_004e14,
  unit: "m3/s2",
  uncertainty: 0,
  source: "IAU 2015 Resolution B3, nominal",
};

/** Astronomical unit, m. */
export const ASTRONOMICAL_UNIT_M: Constant = {
  value: 149_597_870_700,
  unit: "m",
  uncertainty: 0,
  source: "IAU 2012 Resolution B2, exact",
};

/** Light time over one astronomical unit, s. */
export const LIGHT_TIME_AU_S: Constant = {
  value: 149_597_870_700 / 299_792_458,
  unit: "s",
  uncertainty: 0,
  source: "IAU 2012 Resolution B2 and SI, exact",
};

/** Constant of gravitation, m³ kg⁻¹ s⁻²: for densities in SI units, not for masses of stars. */
export const GRAVITATION_M3_KG_S2: Constant = {
  value: 6.674_30e-11,
  unit: "m3 kg-1 s-2",
  uncertainty: 1.5e-15,
  source: "CODATA 2018",
};

/** Boltzmann constant, J/K. */
export const BOLTZMANN_J_K: Constant = {
  value: 1.380_649e-23,
  unit: "J/K",
  uncertainty: 0,
  source: "SI, exact",
};

/** Planck constant, J s. */
export const PLANCK_J_S: Constant = {
  value: 6.626_070_15e-34,
  unit: "J s",
  uncertainty: 0,
  source: "SI, exact",
};

/** Stefan–Boltzmann constant, W m⁻² K⁻⁴. */
export const STEFAN_BOLTZMANN_W_M2_K4: Constant = {
  value: 2 * Math.PI ** 5 * (1.380_649e-23 / 15) * (1.380_649e-23 / 6.626_070_15e-34) ** 3 /
    299_792_458 ** 2,
  unit: "W m-2 K-4",
  uncertainty: 0,
  source: "2π⁵k⁴/(15h³c²), exact in SI",
};

/** Atomic mass constant, kg. */
export const ATOMIC_MASS_KG: Constant = {
  value: 1.660_539_066_60e-27,
  unit: "kg",
  uncertainty: 5.0e-37,
  source: "CODATA 2018",
};

/** Mass of the electron, kg. */
export const ELECTRON_MASS_KG: Constant = {
  value: 9.109_383_701_5e-31,
  unit: "kg",
  uncertainty: 2.8e-40,
  source: "CODATA 2018",
};

/** Seconds in a day. */
export const DAY_S: Constant = { value: 86_400, unit: "s", uncertainty: 0, source: "exact" };

/** Seconds in a Julian year. */
export const JULIAN_YEAR_S: Constant = {
  value: 31_557_600,
  unit: "s",
  uncertainty: 0,
  source: "365.25 days, exact",
};

/** TT − TAI, s. */
export const TT_MINUS_TAI_S: Constant = {
  value: 32.184,
  unit: "s",
  uncertainty: 0,
  source: "IAU 1991 Resolution A4, exact",
};

/** Julian date of the zero of the modified Julian date, d. */
export const MJD_ZERO_JD: Constant = {
  value: 2_400_000.5,
  unit: "d",
  uncertainty: 0,
  source: "exact",
};
