/**
 * FITS: a reader to the depth of the FITS Standard 4.0 (2018) and a writer, both on bytes in memory.
 * Knows nothing about stars.
 *
 * @module
 */
export * from "./card.ts";
export * from "./checksum.ts";
export * from "./column.ts";
export * from "./encode_fits.ts";
export * from "./find_hdu.ts";
export * from "./header.ts";
export * from "./hdu.ts";
export * from "./hdu_spec.ts";
export * from "./parse_fits.ts";
export * from "./values.ts";
