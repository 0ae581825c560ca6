import type { Hdu } from "@millrace/millrace/fits";

/** A number, or one that JSON cannot hold, as text ("NaN", "Infinity", integers beyond 2^53). */
export type Wild = number | string | boolean | null | readonly Wild[];

/** One HDU of a case of reference/fits.json. */
export interface ReferenceHdu {
  readonly cards?: readonly (readonly [string, Wild, string])[];
  readonly comment?: readonly string[];
  readonly history?: readonly string[];
  readonly shape_naxis?: readonly number[];
  readonly data?: readonly Wild[] | null;
  readonly columns?: readonly {
    readonly name: string;
    readonly tform: string;
    readonly unit: string | null;
    readonly values: readonly Wild[];
  }[];
  readonly wavelength_A?: readonly number[];
  readonly data_ok?: boolean;
  readonly header_ok?: boolean;
}

/** One case of reference/fits.json. */
export interface ReferenceCase {
  readonly id: string;
  readonly kind: string;
  readonly file: string;
  readonly bytes: number;
  readonly hdus: readonly ReferenceHdu[];
  readonly error?: string;
}

const folder = new URL("../reference/", import.meta.url);

/** All cases, in the order of the file. */
export const cases: readonly ReferenceCase[] = JSON.parse(
  await Deno.readTextFile(new URL("fits.json", folder)),
).cases;

/** The bytes of a case's file, gzipped where the file is. */
export const bytesOfCase = (file: string): Promise<Uint8Array> =>
  Deno.readFile(new URL(file, folder));

/** Any value written as the reference writes it. */
export function wild(value: unknown): Wild {
  if (typeof value === "bigint") {
    const number = Number(value);
    return Number.isSafeInteger(number) ? number : String(value);
  }
  if (typeof value !== "number") return value as Wild;
  if (Number.isFinite(value) && (!Number.isInteger(value) || Number.isSafeInteger(value))) {
    return value;
  }
  return Number.isInteger(value) ? value : String(value);
}

/** Decodes everything that an HDU holds. */
export function decodeAll(hdu: Hdu): void {
  if (hdu.kind === "image") hdu.exactImage();
  if (hdu.kind === "table") { for (const { number } of hdu.columns) hdu.column(number); }
}
