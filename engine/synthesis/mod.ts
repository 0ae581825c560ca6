/** The synthesis room. @module */
export * from "./disc_profile.ts";
export * from "./disc_shape.ts";
export * from "./pixel_mean.ts";
export * from "./ring_profile.ts";
export * from "./rotation_profile.ts";
