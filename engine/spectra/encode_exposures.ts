import { InputError } from "../errors.ts";
import { encodeImage, encodeStack, encodeTable } from "./encode_fits_exposures.ts";
import { encodeLog, encodeText } from "./encode_text_exposures.ts";
import type { RawExposure } from "./raw_exposure.ts";
import type { SpectraLayout } from "./read_options.ts";

/** A file to be written. */
export interface EncodedFile {
  /** Its name, without folder. */
  readonly name: string;
  /** Its content. */
  readonly bytes: Uint8Array;
}

/** Options of {@linkcode encodeExposures}. */
export interface EncodeExposuresOptions {
  /**
   * How the files are laid out.
   * @default "image"
   */
  readonly layout?: SpectraLayout;
  /**
   * First part of the files' names.
   * @default "exposure"
   */
  readonly stem?: string;
}

/**
 * Writes exposures as a telescope or a pipeline would: "image", one FITS file each; "table", one
 * binary table each, with inverse variances; "stack", one FITS file with a row each and a table of
 * times; "text", one text table each, and `log.csv`.
 *
 * @param exposures The exposures, at least one.
 * @param options Layout, first part of the names.
 * @returns The files, in order of the exposures; the log last.
 * @throws {InputError} When there is no exposure, or those of a stack differ in wavelength.
 *
 * @example
 * ```ts
 * import { encodeExposures } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const files = encodeExposures([{
 *   object: "VX-0417",
 *   ra_deg: 83.1,
 *   dec_deg: -12.4,
 *   wavelength_angstrom: Float64Array.of(4860, 4861, 4862),
 *   medium: "air",
 *   flux: Float64Array.of(1, 2, 1),
 *   flux_unit: "adu",
 *   error: null,
 *   start: [2460311, 0.5],
 *   exposure_s: 120,
 *   site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
 *   resolution_angstrom: 0.97,
 * }]);
 * assertEquals(files.map((file) => file.name), ["exposure-001.fits"]);
 * ```
 */
export function encodeExposures(
  exposures: readonly RawExposure[],
  options: EncodeExposuresOptions = {},
): EncodedFile[] {
  const { layout = "image", stem = "exposure" } = options;
  if (exposures.length === 0) {
    throw new InputError({
      action: "write exposures",
      rule: "there must be at least one",
      value: 0,
    });
  }
  const width = Math.max(3, String(exposures.length).length);
  const name = (i: number, ending: string) =>
    `${stem}-${String(i + 1).padStart(width, "0")}.${ending}`;
  if (layout === "stack") return [{ name: `${stem}s.fits`, bytes: encodeStack(exposures) }];
  if (layout === "image" || layout === "table") {
    const encode = layout === "image" ? encodeImage : encodeTable;
    return exposures.map((exposure, i) => ({ name: name(i, "fits"), bytes: encode(exposure) }));
  }
  const files = exposures.map((exposure, i) => ({
    name: name(i, "txt"),
    bytes: encodeText(exposure),
  }));
  const log = encodeLog(exposures, files.map((file) => file.name));
  return [...files, { name: "log.csv", bytes: log }];
}

/**
 * Writes one exposure as one FITS file.
 *
 * @param exposure The exposure.
 * @param options Layout: "image" or "table".
 * @returns The bytes.
 *
 * @example
 * ```ts
 * import { encodeExposure } from "@millrace/millrace/spectra";
 * import { parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeExposure({
 *   object: "VX-0417",
 *   ra_deg: 83.1,
 *   dec_deg: -12.4,
 *   wavelength_angstrom: Float64Array.of(4860, 4861, 4862),
 *   medium: "air",
 *   flux: Float64Array.of(1, 2, 1),
 *   flux_unit: "adu",
 *   error: null,
 *   start: [2460311, 0.5],
 *   exposure_s: 120,
 *   site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
 *   resolution_angstrom: 0.97,
 * });
 * assertEquals(parseFits(bytes).hdus[0]!.header.string("CTYPE1"), "AWAV");
 * ```
 */
export function encodeExposure(
  exposure: RawExposure,
  options: { readonly layout?: "image" | "table" } = {},
): Uint8Array {
  return options.layout === "table" ? encodeTable(exposure) : encodeImage(exposure);
}
