/**
 * The trail: how a line's profile changes around the orbit, from exposures to native samples and a
 * display grid, with masks, continuum, noise and measurements.
 *
 * @module
 */
export * from "./continuum.ts";
export * from "./continuum_windows.ts";
export * from "./cosmic_rays.ts";
export * from "./describe_trail.ts";
export * from "./display_grid.ts";
export * from "./equivalent_width_error.ts";
export * from "./fold.ts";
export * from "./group_noise.ts";
export * from "./identify_lines.ts";
export * from "./journal.ts";
export * from "./line_coverage.ts";
export * from "./line_strip.ts";
export * from "./make_trail.ts";
export * from "./mask_cosmic_rays.ts";
export * from "./masks.ts";
export * from "./mean_profile.ts";
export * from "./mean_spectrum.ts";
export * from "./measure_trail.ts";
export * from "./native_samples.ts";
export * from "./noise_pairs.ts";
export * from "./normalise.ts";
export * from "./normalise_exposures.ts";
export * from "./phase_coverage.ts";
export * from "./phase_ranges.ts";
export * from "./photometry.ts";
export * from "./pixel_edges.ts";
export * from "./profile_measures.ts";
export * from "./profile_width.ts";
export * from "./rebin.ts";
export * from "./require_trail_options.ts";
export * from "./running_maximum.ts";
export * from "./sampling.ts";
export * from "./select_exposures.ts";
export * from "./sharpness.ts";
export * from "./side_tables.ts";
export * from "./sky_line_zero.ts";
export * from "./telluric_zero.ts";
export * from "./trail.ts";
export * from "./trail_noise.ts";
export * from "./trail_options.ts";
export * from "./trail_warnings.ts";
export * from "./velocity.ts";
export * from "./wavelength_zero.ts";
export * from "./window_contents.ts";
