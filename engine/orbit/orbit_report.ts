/** One star's orbit as measured; null where it was not, with the reason among the warnings. */
export interface StarReport {
  /** K of the line, km/s. */
  readonly k_kms: number | null;
  /** Its standard deviation, km/s. */
  readonly k_error_kms: number | null;
  /** Where K was not measured: what the line showed from slow to fast gas, km/s. */
  readonly k_range_kms: readonly [low: number, high: number] | null;
  /** γ, km/s. */
  readonly systemic_kms: number | null;
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms: number | null;
  /** Phase of upward crossing of γ on the ephemeris reported beside it, cycles in [0, 1). */
  readonly crossing_phase: number | null;
  /** Its standard deviation, cycles. */
  readonly crossing_phase_error: number | null;
  /** Name of the line; null when there was none for this star. */
  readonly line: string | null;
  /** How it was measured. */
  readonly method: string | null;
}

/** The donor's report: its line's K and that of its centre of mass. */
export interface DonorReport extends StarReport {
  /** Where the line comes from. */
  readonly light: "photosphere" | "irradiated" | "quenched";
  /** K2 of the centre of mass, km/s: K divided by the K-correction (its middle when a range). */
  readonly k_centre_kms: number | null;
  /** Its standard deviation, km/s; half the range is in it as an even spread. */
  readonly k_centre_error_kms: number | null;
  /** K2 for the two ends of the K-correction's range, km/s; null when the shadow is known or none matters. */
  readonly k_centre_range_kms: readonly [low: number, high: number] | null;
  /** v sin i, km/s, half-way between limb-darkened and undarkened lines; null when not seen. */
  readonly v_sin_i_kms: number | null;
  /** Its standard deviation, km/s. */
  readonly v_sin_i_error_kms: number | null;
  /** Template that subtracts best; null without template stars. */
  readonly template: string | null;
  /** The donor's share of the light at the line; null without template stars. */
  readonly light_share: number | null;
}

/** One velocity curve in the report. */
export interface CurveReport {
  /** Name of the line. */
  readonly line: string;
  /** How it was measured. */
  readonly method: string;
  /** The star it is meant to follow. */
  readonly star: "accretor" | "donor";
  /** K, km/s; null when no orbit could be fitted. */
  readonly k_kms: number | null;
  /** Its standard deviation, km/s. */
  readonly k_error_kms: number | null;
  /** γ, km/s. */
  readonly systemic_kms: number | null;
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms: number | null;
  /** Phase of upward crossing, cycles. */
  readonly crossing_phase: number | null;
  /** Its standard deviation, cycles. */
  readonly crossing_phase_error: number | null;
  /** Chi-square with the errors as stated. */
  readonly chi_square: number | null;
  /** Velocities less parameters. */
  readonly degrees_of_freedom: number | null;
  /** Added in quadrature to the errors, km/s. */
  readonly jitter_kms: number | null;
  /** Velocities used. */
  readonly sample_count: number;
  /** Whether it counts as a measurement of the star. */
  readonly measured: boolean;
  /** Why not; empty when it does. */
  readonly reasons: readonly string[];
}

/** Masses with asymmetric errors: median, to the 15.87 % and the 84.13 % quantile. */
export interface MassReport {
  /** M1, solar; null without inclination. */
  readonly accretor_msun: number | null;
  /** Downward error. */
  readonly accretor_error_low_msun: number | null;
  /** Upward error. */
  readonly accretor_error_high_msun: number | null;
  /** M2, solar; null without inclination. */
  readonly donor_msun: number | null;
  /** Downward error. */
  readonly donor_error_low_msun: number | null;
  /** Upward error. */
  readonly donor_error_high_msun: number | null;
  /** Inclination, degrees; null when unknown. */
  readonly inclination_deg: number | null;
  /** Downward error. */
  readonly inclination_error_low_deg: number | null;
  /** Upward error. */
  readonly inclination_error_high_deg: number | null;
  /** Separation, nominal solar radii. */
  readonly separation_rsun: number | null;
  /** Downward error. */
  readonly separation_error_low_rsun: number | null;
  /** Upward error. */
  readonly separation_error_high_rsun: number | null;
  /** Volume radius of the donor, nominal solar radii. */
  readonly donor_radius_rsun: number | null;
  /** Mean density of a donor that fills its lobe, g/cm³. */
  readonly donor_density_g_cm3: number | null;
  /** M1 sin³i, solar. */
  readonly accretor_m_sin3i_msun: number | null;
  /** Its standard deviation. */
  readonly accretor_m_sin3i_error_msun: number | null;
  /** M2 sin³i, solar. */
  readonly donor_m_sin3i_msun: number | null;
  /** Its standard deviation. */
  readonly donor_m_sin3i_error_msun: number | null;
  /** P·K2³/2πG, solar: least mass of the accretor. */
  readonly accretor_mass_function_msun: number | null;
  /** P·K1³/2πG, solar: least mass of the donor. */
  readonly donor_mass_function_msun: number | null;
  /** What gave the mass ratio. */
  readonly mass_ratio_from: readonly string[];
}

/** Both stars fitted together: one conjunction and one period, in antiphase, each its own γ. */
export interface JointReport {
  /** K1, km/s. */
  readonly k_accretor_kms: number;
  /** Its standard deviation, km/s. */
  readonly k_accretor_error_kms: number;
  /** K2 of the donor's line, km/s. */
  readonly k_donor_kms: number;
  /** Its standard deviation, km/s. */
  readonly k_donor_error_kms: number;
  /** γ of the accretor's line, km/s. */
  readonly accretor_systemic_kms: number;
  /** γ of the donor's line, km/s. */
  readonly donor_systemic_kms: number;
  /** Correlation of K1 and K2. */
  readonly k_correlation: number;
  /** Conjunction on the reported ephemeris, cycles in (−½, ½]. */
  readonly conjunction_phase: number;
  /** Its standard deviation, cycles. */
  readonly conjunction_phase_error: number;
  /** Chi-square, errors with jitter. */
  readonly chi_square: number;
  /** Velocities less parameters. */
  readonly degrees_of_freedom: number;
}

/** The test of an eccentric orbit (Lucy & Sweeney 1971). */
export interface EccentricityReport {
  /** Name of the line. */
  readonly line: string;
  /** e as fitted: not to be quoted unless significant. */
  readonly eccentricity: number;
  /** Its standard deviation. */
  readonly eccentricity_error: number;
  /** ω, degrees. */
  readonly periastron_deg: number;
  /** Chance that a circular orbit looks as eccentric. */
  readonly probability_if_circular: number;
  /** Whether that chance is below 5 %. */
  readonly significant: boolean;
}

/** The content of `orbit.json`, but for its head. */
export interface OrbitReport {
  /** Period, d. */
  readonly period_d: number;
  /** Its standard deviation, d; null when neither given nor fitted. */
  readonly period_error_d: number | null;
  /** How the period was had: "fitted", or why it was held. */
  readonly period_from: string;
  /** Zero of phase, BJD(TDB), to the 40 µs of one double. */
  readonly zero_bjd_tdb: number;
  /** Its standard deviation, d. */
  readonly zero_error_d: number | null;
  /** Covariance of zero and period, d². */
  readonly zero_period_covariance_d2: number;
  /** What the zero is: "donor-conjunction", "mid-eclipse", "emission-crossing". */
  readonly zero_marks: string;
  /** Where the zero comes from: "donor", "accretor" or "target". */
  readonly zero_from: "donor" | "accretor" | "target";
  /** Zero reported less zero of the target file, cycles in (−½, ½]; null after a period search. */
  readonly zero_shift_cycles: number | null;
  /** The accretor; null when no line traces it. */
  readonly accretor: StarReport | null;
  /** The donor; null when no line traces it. */
  readonly donor: DonorReport | null;
  /** Both stars together; null unless both were measured exposure by exposure. */
  readonly joint: JointReport | null;
  /** Test of eccentricity on the best measured curve; null without one of 7 velocities. */
  readonly eccentricity: EccentricityReport | null;
  /** One per line and method. */
  readonly curves: readonly CurveReport[];
  /** q = M2/M1; null when it could not be had. */
  readonly mass_ratio: number | null;
  /** Its standard deviation. */
  readonly mass_ratio_error: number | null;
  /** Masses. */
  readonly masses: MassReport;
}

/** A row of `velocities.ecsv`. */
export interface VelocityRow {
  /** Name of the line. */
  readonly line: string;
  /** How it was measured. */
  readonly method: string;
  /** The star it is meant to follow. */
  readonly star: "accretor" | "donor";
  /** The exposure. */
  readonly source: string;
  /** Whole part of mid-exposure, BJD(TDB). */
  readonly bjd_day: number;
  /** Fraction of mid-exposure, BJD(TDB). */
  readonly bjd_fraction: number;
  /** Cycle on the reported ephemeris. */
  readonly cycle: number;
  /** Phase on the reported ephemeris. */
  readonly phase: number;
  /** Length of the exposure, cycles. */
  readonly exposure_cycles: number;
  /** Velocity, km/s; null when not measured. */
  readonly velocity_kms: number | null;
  /** Its standard deviation, km/s; null when not measured. */
  readonly error_kms: number | null;
}
