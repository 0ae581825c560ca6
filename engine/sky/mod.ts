/** The sky room. @module */
export * from "./bjd.ts";
export * from "./spectral_line.ts";
