import { Matrix } from "ml-matrix";
import { median, robustSigma, solveLeastSquares } from "../numerics/mod.ts";
import type { LineStrip } from "./line_strip.ts";

/** A range of velocities about a line, km/s: low, high. */
export type VelocityRange = readonly [low_kms: number, high_kms: number];

/** Options of {@linkcode fitContinuum}. */
export interface ContinuumOptions {
  /** Windows in which the continuum is seen, km/s about the line. */
  readonly windows_kms: readonly VelocityRange[];
  /**
   * Order of the polynomial in velocity.
   * @default 1
   */
  readonly order?: number;
  /**
   * Samples further off than this many robust standard deviations are left out, again and again
   * until none is.
   * @default 3
   */
  readonly clip?: number;
}

/** The continuum of one exposure about a line. */
export interface Continuum {
  /** Level at each pixel of the strip, N values, in the file's flux unit. */
  readonly level: Float64Array;
  /** Level at the line's rest wavelength. */
  readonly at_line: number;
  /** Its standard deviation, grown by the scatter where that exceeds the stated errors. */
  readonly at_line_error: number;
  /** 1 where a pixel took part in the fit, N values. */
  readonly used: Uint8Array;
  /** Order of the polynomial: less than asked when only one side of the line was seen. */
  readonly order: number;
  /** Robust scatter about the fit over the stated errors. */
  readonly scatter: number;
  /** Number of windows of which pixels took part. */
  readonly windows_seen: number;
}

// Legendre polynomials: the columns stay independent whatever the order.
function legendre(x: number, order: number): number[] {
  const row = [1];
  if (order >= 1) row.push(x);
  for (let n = 2; n <= order; n++) {
    row.push(((2 * n - 1) * x * row[n - 1]! - (n - 1) * row[n - 2]!) / n);
  }
  return row;
}

function windowOf(velocity: number, windows: readonly VelocityRange[]): number {
  return windows.findIndex(([low, high]) => velocity >= low && velocity <= high);
}

/**
 * Fits the continuum of one exposure by a polynomial in velocity, in stated windows, leaving out
 * what is not continuum: weak lines, cosmic rays. Within a window every pixel has the same weight
 * (from the median of the errors there): weights from each pixel's own photon noise would favour
 * pixels that fell low and put the level too low.
 *
 * @param strip Pixels about the line.
 * @param options Windows, order of the polynomial, clip.
 * @returns The continuum, or null when the windows hold fewer usable pixels than the fit needs.
 *
 * @example
 * ```ts
 * import { fitContinuum } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 41 }, (_, i) => 100 * (i - 20));
 * const strip = {
 *   spectrum: null as never,
 *   first: 0,
 *   velocity_kms,
 *   pixel_kms: velocity_kms.map(() => 100),
 *   flux: velocity_kms.map((v) => 5 + v / 1000 + (Math.abs(v) < 500 ? 3 : 0)),
 *   error: velocity_kms.map(() => 0.1),
 * };
 * const continuum = fitContinuum(strip, { windows_kms: [[-2000, -1000], [1000, 2000]] })!;
 * assertAlmostEquals(continuum.at_line, 5, 1e-9);
 * ```
 */
export function fitContinuum(strip: LineStrip, options: ContinuumOptions): Continuum | null {
  const { windows_kms, clip = 3 } = options;
  const { velocity_kms, flux, error } = strip;
  const used = new Uint8Array(flux.length);
  const window = Array.from(velocity_kms, (v) => windowOf(v, windows_kms));
  const typical = windows_kms.map((_, w) => {
    const errors = error.filter((e, i) => window[i] === w && Number.isFinite(e));
    return errors.length === 0 ? Infinity : median(errors);
  });
  window.forEach((w, i) => used[i] = w >= 0 && Number.isFinite(error[i]!) ? 1 : 0);
  const seen = new Set(window.filter((_, i) => used[i] === 1));
  const sides = new Set([...velocity_kms].filter((_, i) => used[i] === 1).map(Math.sign));
  // One side alone cannot hold a slope across the line: extrapolated, it is worse than none.
  const order = sides.size < 2 ? 0 : options.order ?? 1;

  const low = Math.min(...windows_kms.map((w) => w[0]));
  const high = Math.max(...windows_kms.map((w) => w[1]));
  const basis = (v: number) => legendre((2 * v - low - high) / (high - low), order);

  const shapes = Array.from(velocity_kms, basis);
  while (true) {
    const kept = Array.from(used.keys()).filter((i) => used[i] === 1);
    if (kept.length < order + 3) return null;
    const sigma = Float64Array.from(kept, (i) => typical[window[i]!]!);
    const design = new Matrix(kept.map((i) => shapes[i]!));
    const fit = solveLeastSquares(design, Float64Array.from(kept, (i) => flux[i]!), {
      error: sigma,
    });
    const along = (shape: readonly number[]) => {
      let sum = 0;
      for (let k = 0; k <= order; k++) sum += shape[k]! * fit.parameters[k]!;
      return sum;
    };
    const residual = Float64Array.from(
      kept,
      (i, n) => (flux[i]! - along(shapes[i]!)) / sigma[n]!,
    );
    const scatter = robustSigma(residual, 0) * Math.sqrt(kept.length / (kept.length - order - 1));
    const out = kept.filter((_, n) => Math.abs(residual[n]!) > clip * scatter);
    if (out.length > 0 && scatter > 0 && kept.length - out.length >= order + 3) {
      for (const i of out) used[i] = 0;
      continue;
    }
    const middle = basis(0);
    let variance = 0;
    for (let a = 0; a <= order; a++) {
      for (let b = 0; b <= order; b++) {
        variance += middle[a]! * middle[b]! * fit.covariance.get(a, b);
      }
    }
    return {
      level: velocity_kms.map((_, i) => along(shapes[i]!)),
      at_line: along(middle),
      at_line_error: Math.sqrt(variance) * Math.max(1, scatter),
      used,
      order,
      scatter,
      windows_seen: seen.size,
    };
  }
}
