import { robustSigma } from "../numerics/mod.ts";

/** Residuals of one exposure's continuum windows. */
export interface WindowResiduals {
  /** Pixel centres, N values, km/s, increasing. */
  readonly velocity_kms: Float64Array;
  /** Residual from the fitted continuum over the stated error, N values; NaN outside the windows and where masked. */
  readonly residual: Float64Array;
  /** Number of parameters of the fit. */
  readonly parameters: number;
}

/** Scatter of residuals over their errors, and its correlation from pixel to pixel. */
export interface MeasuredNoise {
  /** Scatter over stated error. */
  readonly scale: number;
  /** One standard deviation of `scale`. */
  readonly scale_error: number;
  /** Correlation at lags 1, 2, … up to the last significant one, at most 10. */
  readonly lag_correlation: readonly number[];
  /** 1 + 2 Σ lag correlation, at least 1. */
  readonly correlation_length_pixels: number;
  /** Samples used. */
  readonly samples: number;
}

const LARGEST_LAG = 10;

function nearest(velocity: Float64Array, v: number, from: number): number {
  let i = from;
  while (i + 1 < velocity.length && Math.abs(velocity[i + 1]! - v) <= Math.abs(velocity[i]! - v)) {
    i++;
  }
  return i;
}

// What all exposures share at a velocity (weak lines, flat-field residuals) is structure, not noise.
function subtractCommon(exposures: readonly WindowResiduals[]): Float64Array[] {
  const axis = exposures[0]!.velocity_kms;
  const sum = new Float64Array(axis.length);
  const count = new Float64Array(axis.length);
  const places = exposures.map(({ velocity_kms, residual }) => {
    let at = 0;
    return Array.from(velocity_kms, (v, i) => {
      at = nearest(axis, v, at);
      if (Number.isFinite(residual[i]!)) {
        sum[at]! += residual[i]!;
        count[at]!++;
      }
      return at;
    });
  });
  return exposures.map(({ residual }, k) =>
    residual.map((r, i) => {
      const at = places[k]![i]!;
      const n = count[at]!;
      return n < 4 ? NaN : (r - sum[at]! / n) * Math.sqrt(n / (n - 1));
    })
  );
}

/**
 * Measures the noise of exposures that share a set-up from their continuum windows: its scale
 * against the stated errors, and the correlation that resampling leaves between pixels. With eight
 * exposures or more, structure that all share is taken out first.
 *
 * @param exposures Residuals over errors.
 * @returns The measured noise, or null with fewer than 30 samples.
 *
 * @example Noise of twice the stated size
 * ```ts
 * import { measureNoise } from "@millrace/millrace/trail";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const random = randomStream(1);
 * const exposures = Array.from({ length: 20 }, () => ({
 *   velocity_kms: Float64Array.from({ length: 200 }, (_, i) => i),
 *   residual: Float64Array.from({ length: 200 }, () => 2 * random.normal()),
 *   parameters: 0,
 * }));
 * assertAlmostEquals(measureNoise(exposures)!.scale, 2, 0.1);
 * ```
 */
export function measureNoise(exposures: readonly WindowResiduals[]): MeasuredNoise | null {
  const grown = exposures.map(({ velocity_kms, residual, parameters }) => {
    const n = residual.reduce((sum, r) => sum + (Number.isFinite(r) ? 1 : 0), 0);
    const growth = n > parameters ? Math.sqrt(n / (n - parameters)) : NaN;
    return { velocity_kms, residual: residual.map((r) => r * growth), parameters, n };
  });
  const rows = grown.length >= 8 ? subtractCommon(grown) : grown.map((row) => row.residual);
  const all = rows.flatMap((row) => [...row].filter((r) => Number.isFinite(r)));
  if (all.length < 30) return null;
  const scale = robustSigma(all, 0);
  if (!(scale > 0)) return null;

  const lag_correlation: number[] = [];
  for (let lag = 1; lag <= LARGEST_LAG; lag++) {
    let sum = 0, count = 0, expected = 0;
    rows.forEach((row, k) => {
      const { parameters, n } = grown[k]!;
      for (let i = 0; i + lag < row.length; i++) {
        const product = row[i]! * row[i + lag]!;
        if (!(Math.abs(row[i]!) < 4 * scale && Math.abs(row[i + lag]!) < 4 * scale)) continue;
        sum += product / scale ** 2;
        // The fit of p parameters to n samples correlates its residuals by about −p/n.
        expected -= parameters / n;
        count++;
      }
    });
    const correlation = count > 0 ? (sum - expected) / count : 0;
    if (!(Math.abs(correlation) > 3 / Math.sqrt(count))) break;
    lag_correlation.push(correlation);
  }
  const length = Math.max(1, 1 + 2 * lag_correlation.reduce((sum, r) => sum + r, 0));
  // The median absolute deviation of n normal samples has the relative error 1.166 / √n.
  const scale_error = 1.166 * scale * Math.sqrt(length / all.length);
  return {
    scale,
    scale_error,
    lag_correlation,
    correlation_length_pixels: length,
    samples: all.length,
  };
}
