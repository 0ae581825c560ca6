/** The spectra room. @module */
export * from "./spectrum.ts";
