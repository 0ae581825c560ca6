/**
 * The binary as a geometry: mass ratio and speeds from any sufficient set of numbers, Kepler's
 * third law, Roche lobes, the ballistic stream and the disc's radii, in space and in velocity;
 * and the ephemeris that tells its phase.
 *
 * Lengths are in units of the separation with the origin at the accretor, x towards the donor and y
 * along the donor's motion. Velocities in km/s are map coordinates: inertial, along axes that turn
 * with the binary, donor at (0, +K2), accretor at (0, −K1).
 *
 * @module
 */
export * from "./ballistic_stream.ts";
export * from "./binary.ts";
export * from "./binary_from.ts";
export * from "./corotation.ts";
export * from "./disc_radii.ts";
export * from "./donor_density.ts";
export * from "./donor_surface.ts";
export * from "./eclipse_width.ts";
export * from "./ephemeris.ts";
export * from "./ephemeris_from.ts";
export * from "./ephemeris_phase.ts";
export * from "./geometry.ts";
export * from "./kepler_equation.ts";
export * from "./kepler_third_law.ts";
export * from "./keplerian_motion.ts";
export * from "./lagrange_points.ts";
export * from "./lobe_outline.ts";
export * from "./lobe_radius.ts";
export * from "./lobe_surface.ts";
export * from "./mass_ratio_rule.ts";
export * from "./rim_impact.ts";
export * from "./roche_potential.ts";
