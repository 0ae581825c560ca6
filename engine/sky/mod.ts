/**
 * The sky between star and telescope: time scales, the barycentre, air, and the lists of lines.
 *
 * @module
 */
export * from "./air.ts";
export * from "./bjd.ts";
export * from "./doppler.ts";
export * from "./line_list.ts";
export * from "./spectral_line.ts";
