/** The workers room. @module */
export * from "./progress.ts";
