import { closestString } from "@std/text";
import { fitsError } from "./fits_error.ts";
import type { Hdu } from "./hdu.ts";
import type { FitsFile } from "./parse_fits.ts";

/** Options of {@linkcode findHdu}. */
export interface FindHduOptions {
  /**
   * EXTVER of the HDU; the first of the name when not given.
   * @default {undefined}
   */
  readonly version?: number;
}

/**
 * Finds an HDU by name or number.
 *
 * @param fits The file.
 * @param key Name (EXTNAME, without regard to case) or number, from 0.
 * @param options Version (EXTVER), when several HDUs have the name.
 * @returns The HDU.
 * @throws {InputError} If there is none, naming those that there are.
 *
 * @example
 * ```ts
 * import { encodeFits, findHdu, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const shape = [1];
 * const fits = parseFits(encodeFits([
 *   { kind: "image", name: "FLUX", shape, data: new Float64Array([3]) },
 *   { kind: "image", name: "ERROR", shape, data: new Float64Array([4]) },
 * ]));
 * assertEquals(findHdu(fits, "error").index, 1);
 * ```
 */
export function findHdu(
  fits: FitsFile,
  key: string | number,
  options: FindHduOptions = {},
): Hdu {
  const { version } = options;
  const wanted = String(key).trim().toUpperCase();
  const found = typeof key === "number"
    ? fits.hdus[key]
    : fits.hdus.find((hdu) =>
      hdu.name.toUpperCase() === wanted && (version === undefined || hdu.version === version)
    );
  if (found !== undefined) return found;
  const names = fits.hdus.map(({ name, index }) => name === "" ? String(index) : name);
  const nearest = names.length === 0 ? "" : closestString(String(key), names);
  throw fitsError(
    { file: fits.file, hdu: 0 },
    `there must be such an HDU: there are ${names.join(", ")}`,
    {
      value: version === undefined ? key : `${key}, version ${version}`,
      remedy: `the nearest name is ${nearest}`,
    },
  );
}
