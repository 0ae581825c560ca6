/** The binary room. @module */
export * from "./binary.ts";
export * from "./ephemeris.ts";
