/**
 * Velocity curves and orbits: the accretor from a line's wings, the donor from templates, periods,
 * K-corrections and masses, each with its error or the reason why it was not measured.
 *
 * @module
 */
export * from "./back_projected_correlation.ts";
export * from "./broadening.ts";
export * from "./circular_fit.ts";
export * from "./cross_correlation.ts";
export * from "./diagnostic_diagram.ts";
export * from "./donor_template.ts";
export * from "./donor_velocities.ts";
export * from "./double_gaussian.ts";
export * from "./eccentric_fit.ts";
export * from "./false_alarm.ts";
export * from "./light_centre.ts";
export * from "./line_profile.ts";
export * from "./k_correction.ts";
export * from "./lomb_scargle.ts";
export * from "./mass_input.ts";
export * from "./mass_planes.ts";
export * from "./mass_solution.ts";
export * from "./optimal_subtraction.ts";
export * from "./measure_accretor.ts";
export * from "./measure_donor.ts";
export * from "./measure_orbit.ts";
export * from "./orbit_fit.ts";
export * from "./orbit_line.ts";
export * from "./orbit_report.ts";
export * from "./period_search.ts";
export * from "./phase_dispersion.ts";
export * from "./phase_spread.ts";
export * from "./plateau.ts";
export * from "./profile_velocity.ts";
export * from "./rephase.ts";
export * from "./rotation_ratio.ts";
export * from "./spectral_window.ts";
export * from "./template_match.ts";
export * from "./time_series.ts";
export * from "./trail_symmetry.ts";
export * from "./velocity_curve.ts";
export type { DrawSummary } from "./weighted_summary.ts";
export * from "./wing_symmetry.ts";
