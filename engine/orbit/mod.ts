/** The orbit room. @module */
export * from "./circular_fit.ts";
export * from "./diagnostic_diagram.ts";
export * from "./double_gaussian.ts";
export * from "./eccentric_fit.ts";
export * from "./false_alarm.ts";
export * from "./light_centre.ts";
export * from "./line_profile.ts";
export * from "./lomb_scargle.ts";
export * from "./orbit_fit.ts";
export * from "./period_search.ts";
export * from "./phase_dispersion.ts";
export * from "./plateau.ts";
export * from "./profile_velocity.ts";
export * from "./spectral_window.ts";
export * from "./time_series.ts";
export * from "./velocity_curve.ts";
export * from "./wing_symmetry.ts";
