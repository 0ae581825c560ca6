/** The trail room. @module */
export * from "./sampling.ts";
export * from "./trail.ts";
