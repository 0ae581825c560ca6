/**
 * The target file, the steps of the commands, and how a run is recorded.
 *
 * @module
 */
export * from "./output_head.ts";
export * from "./override.ts";
export * from "./target.ts";
export * from "./toml_document.ts";
export * from "./version.ts";
export type * from "./schema/target_schema.ts";
export type * from "./schema/binary_section.ts";
export type * from "./schema/exposures_section.ts";
export type * from "./schema/lines_section.ts";
export type * from "./schema/map_section.ts";
export type * from "./schema/orbit_section.ts";
export type * from "./schema/plate_section.ts";
export type * from "./schema/sky_section.ts";
export type * from "./schema/trail_section.ts";
