import { InputError } from "../errors.ts";

/** Where in a file something is read, for messages. */
export interface Place {
  /** File the bytes came from. */
  readonly file?: string | undefined;
  /** HDU, counted from 0 (the primary one). */
  readonly hdu: number;
}

/** Further parts of a message about damaged or unsupported FITS. */
export interface FitsErrorParts {
  /** The offending value. */
  readonly value?: unknown;
  /** Keyword or column. */
  readonly key?: string;
  /** Byte of the file. */
  readonly offset?: number;
  /** What the user can do. */
  readonly remedy?: string;
}

/**
 * Makes the error for something in a FITS file that cannot be read.
 *
 * @param place File and HDU.
 * @param rule What was expected.
 * @param parts The value, keyword, byte offset and remedy.
 * @returns The error, to be thrown.
 */
export function fitsError(place: Place, rule: string, parts: FitsErrorParts = {}): InputError {
  const { offset, value, key, remedy } = parts;
  const at = offset === undefined ? `HDU ${place.hdu}` : `HDU ${place.hdu}, byte ${offset}`;
  return new InputError({
    action: "read FITS file",
    rule: `${rule} (${at})`,
    ...("value" in parts ? { value: typeof value === "bigint" ? String(value) : value } : {}),
    file: place.file,
    key,
    remedy,
  });
}
