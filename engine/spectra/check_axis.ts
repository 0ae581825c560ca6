import { InputError } from "../errors.ts";

/** A spectrum's arrays in increasing order of wavelength. */
export interface OrderedSamples {
  /** Wavelengths, N values, strictly increasing. */
  readonly wavelength: Float64Array;
  /** Flux, N values. */
  readonly flux: Float64Array;
  /** One standard deviation, N values; null when there are none. */
  readonly error: Float64Array | null;
  /** Whether they were turned round. */
  readonly turned: boolean;
}

const rounded = (value: number) => Number(value.toFixed(4));

/**
 * Puts samples in increasing order of wavelength: turns them round when they decrease throughout.
 *
 * @param samples Wavelengths, fluxes and errors, all of one length.
 * @param place File, for messages.
 * @returns The samples in order, in new arrays.
 * @throws {InputError} When the arrays differ in length, there are fewer than two samples, or the
 * wavelengths neither increase nor decrease throughout; with the pixel, from 1.
 *
 * @example
 * ```ts
 * import { inOrder } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const samples = { wavelength: Float64Array.of(5002, 5001), flux: Float64Array.of(1, 2), error: null };
 * assertEquals(inOrder(samples, { file: "a.fits" }).flux, Float64Array.of(2, 1));
 * ```
 */
export function inOrder(
  samples: Pick<OrderedSamples, "wavelength" | "flux" | "error">,
  place: { readonly file: string },
): OrderedSamples {
  const action = "read spectrum";
  const { wavelength, flux, error } = samples;
  const lengths = [wavelength.length, flux.length, ...(error === null ? [] : [error.length])];
  if (lengths.some((n) => n !== lengths[0]) || lengths[0]! < 2) {
    throw new InputError({
      action,
      rule: "there must be as many wavelengths as fluxes and errors, two at least",
      value: lengths.join(", "),
      ...place,
    });
  }
  const turned = wavelength[wavelength.length - 1]! < wavelength[0]!;
  const order = turned ? -1 : 1;
  for (let i = 0; i < wavelength.length; i++) {
    const here = wavelength[i]!;
    const ok = Number.isFinite(here) && here > 0 &&
      (i === 0 || order * (here - wavelength[i - 1]!) > 0);
    if (ok) continue;
    throw new InputError({
      action,
      rule: `wavelengths must increase (or decrease) throughout, and pixel ${i + 1} does not${
        i === 0 ? "" : ` after ${rounded(wavelength[i - 1]!)}`
      }`,
      value: rounded(here),
      unit: "angstrom",
      ...place,
      remedy: "join overlapping orders into one spectrum, or give each its own",
    });
  }
  const put = (values: Float64Array) => turned ? values.slice().reverse() : values.slice();
  return {
    wavelength: put(wavelength),
    flux: put(flux),
    error: error === null ? null : put(error),
    turned,
  };
}
