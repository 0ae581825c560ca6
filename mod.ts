/**
 * Millrace: from time-resolved spectra of accreting binaries to trails, velocity maps, orbits,
 * forward models and figures. Each room of the engine has an entry of its own.
 *
 * @module
 */
export * from "./engine/errors.ts";
