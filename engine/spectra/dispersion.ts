import { InputError } from "../errors.ts";

/** Options of {@linkcode polynomialDispersion}. */
export interface PolynomialOptions {
  /** Kind of the polynomials. */
  readonly kind: "chebyshev" | "legendre";
  /** Pixel, from 1, at which their argument is −1. */
  readonly low_pixel: number;
  /** Pixel, from 1, at which their argument is +1. */
  readonly high_pixel: number;
}

/**
 * Wavelengths of a dispersion given as a sum of Chebyshev or Legendre polynomials of the pixel's
 * number.
 *
 * @param coefficients Coefficients, lowest degree first.
 * @param options Kind, and the pixels between which the argument goes from −1 to +1.
 * @returns A function of the pixel's number, from 1.
 * @throws {InputError} When the two pixels are the same or there is no coefficient.
 *
 * @example A straight line
 * ```ts
 * import { polynomialDispersion } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const at = polynomialDispersion([5000, 100], { kind: "legendre", low_pixel: 1, high_pixel: 201 });
 * assertEquals([at(1), at(101), at(201)], [4900, 5000, 5100]);
 * ```
 */
export function polynomialDispersion(
  coefficients: readonly number[],
  options: PolynomialOptions,
): (pixel: number) => number {
  const { kind, low_pixel, high_pixel } = options;
  if (!(high_pixel !== low_pixel) || coefficients.length === 0) {
    throw new InputError({
      action: "read polynomial dispersion",
      rule: "it must have coefficients and two different end pixels",
      value: [coefficients.length, low_pixel, high_pixel],
    });
  }
  const middle = 0.5 * (low_pixel + high_pixel);
  const half = 0.5 * (high_pixel - low_pixel);
  return (pixel) => {
    const x = (pixel - middle) / half;
    let before = 1, here = x;
    let sum = coefficients[0]! + (coefficients[1] ?? 0) * x;
    for (let n = 2; n < coefficients.length; n++) {
      const next = kind === "chebyshev"
        ? 2 * x * here - before
        : ((2 * n - 1) * x * here - (n - 1) * before) / n;
      sum += coefficients[n]! * next;
      [before, here] = [here, next];
    }
    return sum;
  };
}
