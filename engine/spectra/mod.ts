/**
 * Spectra: reads exposures in every layout that telescopes and pipelines write, brings them to
 * vacuum barycentric wavelengths and BJD(TDB), says what it decided from which key, and writes the
 * layouts.
 *
 * @module
 */
export * from "./check_axis.ts";
export * from "./decision.ts";
export * from "./dispersion.ts";
export * from "./encode_exposures.ts";
export * from "./error_kind.ts";
export * from "./estimate_errors.ts";
export * from "./facts.ts";
export * from "./find_direction.ts";
export * from "./find_duration.ts";
export * from "./find_frame.ts";
export * from "./find_site.ts";
export * from "./find_resolution.ts";
export * from "./find_time.ts";
export * from "./first_read.ts";
export * from "./fits_axis.ts";
export * from "./flux_image.ts";
export * from "./number_text.ts";
export * from "./pointing.ts";
export * from "./raw_exposure.ts";
export * from "./read_exposures.ts";
export * from "./read_image.ts";
export * from "./read_log.ts";
export * from "./read_options.ts";
export * from "./read_stack.ts";
export * from "./read_table.ts";
export * from "./read_text.ts";
export * from "./recorded_axis.ts";
export * from "./recorded_exposure.ts";
export * from "./running_median.ts";
export * from "./settle_exposure.ts";
export * from "./spectral_variable.ts";
export * from "./spectrum.ts";
export * from "./table_facts.ts";
export * from "./wat_cards.ts";
export * from "./wavelength_units.ts";
export * from "./written_time.ts";
