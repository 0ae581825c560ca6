/**
 * Velocity maps: the projector from a map to a trail and its adjoint, filtered back-projection,
 * maximum entropy, and what can be said of a map.
 *
 * @module
 */
export * from "./any_map.ts";
export * from "./axisymmetric_part.ts";
export * from "./back_projection.ts";
export * from "./baseline.ts";
export * from "./best_positive_map.ts";
export * from "./blend_projector.ts";
export * from "./block_bootstrap.ts";
export * from "./blur_map.ts";
export * from "./check_trail.ts";
export * from "./core_miss.ts";
export * from "./cross_validation.ts";
export * from "./entropy_measure.ts";
export * from "./entropy_scans.ts";
export * from "./entropy_solver.ts";
export * from "./fourier_metric.ts";
export * from "./gather_lines.ts";
export * from "./half_orbit.ts";
export * from "./inside_out.ts";
export * from "./invert_trail.ts";
export * from "./line_level.ts";
export * from "./linear_operator.ts";
export * from "./local_resolution.ts";
export * from "./map_excess.ts";
export * from "./map_features.ts";
export * from "./map_fit.ts";
export * from "./map_peak.ts";
export * from "./map_replicas.ts";
export * from "./map_shape.ts";
export * from "./maximum_entropy.ts";
export * from "./mean_flux.ts";
export * from "./mirror_test.ts";
export * from "./modulated_map.ts";
export * from "./modulation_in.ts";
export * from "./moment_test.ts";
export * from "./nearest_part.ts";
export * from "./negative_flux.ts";
export * from "./noise_replica.ts";
export * from "./parameter_scan.ts";
export * from "./point_response.ts";
export * from "./prior_image.ts";
export * from "./profile_filter.ts";
export * from "./profile_moments.ts";
export * from "./projector.ts";
export * from "./reference_projector.ts";
export * from "./resolution.ts";
export * from "./ring_profile.ts";
export * from "./sampling_structures.ts";
export * from "./search_subspace.ts";
export * from "./separate_maps.ts";
export * from "./slant_geometry.ts";
export * from "./slant_kernel.ts";
export * from "./slant_plan.ts";
export * from "./slant_projector.ts";
export * from "./smearing.ts";
export * from "./system_frame.ts";
export * from "./total_variation.ts";
export * from "./total_variation_solver.ts";
export * from "./uniform_profiles.ts";
export * from "./vector_machine.ts";
export * from "./velocity_map.ts";
export * from "./wiener_gain.ts";
