/**
 * The sky between star and telescope: time scales, the barycentre, air, and the lists of lines.
 *
 * @module
 */
export * from "./air.ts";
export * from "./barycentre.ts";
export * from "./bjd.ts";
export { type Direction, directionFromEquinox } from "./direction.ts";
export * from "./doppler.ts";
export * from "./iso_date.ts";
export * from "./julian_date.ts";
export { LEAP_SECONDS_KNOWN_UNTIL, leapSecondWarnings, taiMinusUtc } from "./leap_seconds.ts";
export * from "./line_list.ts";
export * from "./night_sky.ts";
export * from "./observed_windows.ts";
export * from "./published_date.ts";
export * from "./sexagesimal.ts";
export * from "./site.ts";
export * from "./spectral_line.ts";
export * from "./time_scales.ts";
