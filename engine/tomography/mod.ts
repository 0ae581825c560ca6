/** The tomography room. @module */
export * from "./velocity_map.ts";
