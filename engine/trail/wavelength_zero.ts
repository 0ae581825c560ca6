import { Matrix } from "ml-matrix";
import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { median, robustSigma, solveLeastSquares } from "../numerics/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";

/** Shift of one exposure's wavelengths in the observer's frame. */
export interface ZeroShift {
  /** The exposure. */
  readonly source: string;
  /** How far its wavelengths are too long, km/s; NaN when nothing could be measured. */
  readonly shift_kms: number;
  /** One standard deviation, km/s. */
  readonly error_kms: number;
  /** Features that were measured. */
  readonly features: number;
}

/** Scatter of shifts, and how they go with the orbit. */
export interface ZeroReport {
  /** Median shift, km/s. */
  readonly median_kms: number;
  /** Robust scatter about it, km/s. */
  readonly scatter_kms: number;
  /** Semi-amplitude of the part that goes with the orbital phase, km/s: what it would add to a K. */
  readonly orbital_kms: number;
  /** Its standard deviation, km/s. */
  readonly orbital_error_kms: number;
  /** Exposures measured. */
  readonly measured: number;
}

/**
 * Tells how the zeros of wavelength scatter and drift with the orbital phase, by a fit of constant,
 * cosine and sine: a drift over a night of one orbit looks like orbital motion.
 *
 * @param shifts The shifts.
 * @param phase Phase of each exposure, cycles.
 * @returns The report; null with fewer than five measured exposures.
 *
 * @example
 * ```ts
 * import { reportZeros } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const phase = Array.from({ length: 20 }, (_, k) => k / 20);
 * const shifts = phase.map((p) => ({
 *   source: "",
 *   shift_kms: 5 + 10 * Math.sin(2 * Math.PI * p),
 *   error_kms: 1,
 *   features: 1,
 * }));
 * assertAlmostEquals(reportZeros(shifts, phase)!.orbital_kms, 10, 1e-9);
 * ```
 */
export function reportZeros(
  shifts: readonly ZeroShift[],
  phase: ArrayLike<number>,
): ZeroReport | null {
  const known = shifts.flatMap((s, i) =>
    Number.isFinite(s.shift_kms) ? [{ ...s, phase: phase[i]! }] : []
  );
  if (known.length < 5) return null;
  const values = known.map((s) => s.shift_kms);
  const angles = known.map((k) => 2 * Math.PI * k.phase);
  const design = new Matrix(angles.map((a) => [1, Math.cos(a), Math.sin(a)]));
  const fit = solveLeastSquares(design, values);
  const [, c, s] = fit.parameters;
  // What the sinusoid leaves counts as noise where it is more than the errors say.
  const left = fit.chi_square / Math.max(1, known.length - 3);
  const stated = known.reduce((sum, k) => sum + k.error_kms ** 2, 0) / known.length;
  const variance = Math.max(left, Number.isFinite(stated) ? stated : 0);
  const of = (i: number, k: number) => fit.covariance.get(i, k);
  const amplitude = Math.hypot(c!, s!);
  const along = amplitude === 0 ? [1, 0] as const : [c! / amplitude, s! / amplitude] as const;
  return {
    median_kms: median(values),
    scatter_kms: robustSigma(values),
    orbital_kms: amplitude,
    orbital_error_kms: Math.sqrt(
      variance * (along[0] ** 2 * of(1, 1) + 2 * along[0] * along[1] * of(1, 2) +
        along[1] ** 2 * of(2, 2)),
    ),
    measured: known.length,
  };
}

/**
 * Corrects exposures by measured or listed shifts of wavelength. Exposures without a shift stay as
 * they are.
 *
 * @param spectra Exposures on barycentric wavelengths.
 * @param shifts One shift an exposure, in the same order: how far wavelengths are too long.
 * @returns New spectra.
 *
 * @example
 * ```ts
 * import { correctZero } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(correctZero([], []), []);
 * ```
 */
export function correctZero(
  spectra: readonly Spectrum[],
  shifts: readonly Pick<ZeroShift, "shift_kms">[],
): Spectrum[] {
  return spectra.map((spectrum, i) => {
    const shift = shifts[i]?.shift_kms ?? NaN;
    if (!Number.isFinite(shift)) return spectrum;
    const factor = 1 / (1 + shift / SPEED_OF_LIGHT_KMS.value);
    return {
      ...spectrum,
      wavelength_angstrom: spectrum.wavelength_angstrom.map((w) => w * factor),
    };
  });
}
