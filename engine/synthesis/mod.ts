/**
 * The forward model: from a physical description of an accreting binary (disc, bright spot, stream,
 * donor, accretor, outflow, eclipse) to the trail that a telescope would record, to its intensity in
 * velocity space, and to raw exposures. The room's README lists the parts with their parameters and
 * published sources.
 *
 * @module
 */
export * from "./check_model.ts";
export * from "./compare_trail.ts";
export * from "./complete_model.ts";
export * from "./disc_profile.ts";
export * from "./disc_shape.ts";
export * from "./line_of_sight.ts";
export * from "./model.ts";
export * from "./model_map.ts";
export * from "./model_parameters.ts";
export * from "./observation.ts";
export * from "./observe.ts";
export * from "./pixel_mean.ts";
export * from "./plan_exposures.ts";
export * from "./profile_at.ts";
export * from "./ring_profile.ts";
export * from "./rotation_profile.ts";
export * from "./rim_place.ts";
export * from "./spot_place.ts";
export * from "./synthesize.ts";
