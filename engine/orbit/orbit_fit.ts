import { type DenseMatrix, minimise } from "../numerics/mod.ts";
import { InputError, NotConverged } from "../errors.ts";
import { fitCircular, type ScatterRule } from "./circular_fit.ts";
import {
  measuredOnly,
  smearFactor,
  type TracedStar,
  type VelocityCurve,
} from "./velocity_curve.ts";

/** One star's part in an {@linkcode OrbitFit}. */
export interface StarOrbit {
  /** Which star. */
  readonly star: TracedStar;
  /** Name of the line. */
  readonly line: string;
  /** How the velocities were measured. */
  readonly method: string;
  /** K, km/s. */
  readonly k_kms: number;
  /** Its standard deviation, km/s. */
  readonly k_error_kms: number;
  /** γ, km/s. */
  readonly systemic_kms: number;
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms: number;
  /** Added in quadrature to this star's errors, km/s. */
  readonly jitter_kms: number;
  /** Index of K in the covariance. */
  readonly k_index: number;
  /** Index of γ in the covariance. */
  readonly systemic_index: number;
}

/** A circular orbit of one star or both, with its ephemeris. */
export interface OrbitFit {
  /** The stars, in the order given. */
  readonly stars: readonly StarOrbit[];
  /**
   * Donor's inferior conjunction nearest the middle of the data, in orbits of the ephemeris since its
   * zero: a whole number when the ephemeris is right.
   */
  readonly conjunction_orbits: number;
  /** Its standard deviation, orbits. */
  readonly conjunction_error_orbits: number;
  /** Fitted period over the ephemeris's; 1 when held. */
  readonly period_ratio: number;
  /** Its standard deviation; 0 when held. */
  readonly period_ratio_error: number;
  /** Covariance of conjunction and period ratio. */
  readonly conjunction_period_covariance: number;
  /** Whether the period was fitted, and if not, why not. */
  readonly period: "fitted" | "held as asked" | "held: data span under two orbits";
  /** Covariance of all fitted numbers: see the indices of `stars`; conjunction, period ratio last. */
  readonly covariance: DenseMatrix;
  /** Chi-square, errors with jitter. */
  readonly chi_square: number;
  /** Velocities less parameters. */
  readonly degrees_of_freedom: number;
}

/** Options of {@linkcode fitOrbit}. */
export interface OrbitFitOptions {
  /** Hold the period, or fit it when the data span two orbits. @default {"free"} */
  readonly period?: "held" | "free";
  /** Standard deviation of the ephemeris's period over itself, used as a prior; 0 when unknown. @default {0} */
  readonly period_prior?: number;
  /** Whether two stars have one γ or each its own. @default {"apart"} */
  readonly systemic?: "shared" | "apart";
  /** What to do about excess scatter. @default {"jitter"} */
  readonly scatter?: ScatterRule;
  /** Whether outliers lose their weight. @default {false} */
  readonly robust?: boolean;
}

const TWO_PI = 2 * Math.PI;

/** Crossing phase of a star's curve relative to the donor's conjunction. */
const HALF_TURN: Readonly<Record<TracedStar, number>> = { donor: 0, accretor: 0.5 };

/** Time spanned by all curves and their weighted mean time, orbits. */
function spanOf(curves: readonly VelocityCurve[]) {
  let first = Infinity, last = -Infinity, sum = 0, weight = 0;
  for (const { orbits, error_kms } of curves) {
    orbits.forEach((x, k) => {
      first = Math.min(first, x);
      last = Math.max(last, x);
      sum += x / error_kms[k]! ** 2;
      weight += 1 / error_kms[k]! ** 2;
    });
  }
  return { span: last - first, middle: sum / weight };
}

/**
 * Fits circular orbits to the velocities of one star, or of both at once in antiphase with one
 * conjunction and one period: non-linear least squares of K, γ, conjunction and period. The
 * conjunction reported is the one nearest the weighted mean time, where it hardly depends on the
 * period.
 *
 * The period is held when the data span under two orbits: it would trade against everything else.
 *
 * @param curves One curve, or one of each star.
 * @param options Period, prior, γ, scatter.
 * @returns The orbit.
 * @throws {InputError} When velocities are fewer than 5 in a curve, the phases do not spread, or
 * two curves are of one star.
 * @throws {NotConverged} When the fit does not settle; partial is what was reached.
 *
 * @example
 * ```ts
 * import { fitOrbit } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const orbits = Float64Array.from({ length: 40 }, (_, k) => 0.13 * k);
 * const fit = fitOrbit([{
 *   line: "Na I 8190", method: "cross-correlation", star: "donor",
 *   orbits, exposure_orbits: new Float64Array(40),
 *   velocity_kms: orbits.map((x) => 30 + 320 * Math.sin(2 * Math.PI * x / 1.001)),
 *   error_kms: new Float64Array(40).fill(10),
 * }]);
 * assertAlmostEquals(fit.period_ratio, 1.001, 1e-7);
 * assertAlmostEquals(fit.stars[0]!.k_kms, 320, 1e-4);
 * ```
 */
export function fitOrbit(
  curves: readonly VelocityCurve[],
  options: OrbitFitOptions = {},
): OrbitFit {
  const { period = "free", period_prior = 0, systemic = "apart" } = options;
  const { scatter = "jitter", robust = false } = options;
  if (curves.length === 0 || curves.length > 2 || curves[0]!.star === curves[1]?.star) {
    throw new InputError({
      action: "fit orbit",
      rule: "it takes one curve, or one of each star",
      value: curves.map((curve) => curve.star),
    });
  }
  const alone = curves.map((curve) => fitCircular(curve, { scatter, robust }));
  const used = curves.map((curve, c) => {
    const { error_kms, ...rest } = measuredOnly(curve);
    const { jitter_kms, error_scale } = alone[c]!;
    return { ...rest, error_kms: error_kms.map((e) => error_scale * Math.hypot(e, jitter_kms)) };
  });
  const { span, middle } = spanOf(used);
  const state = period === "held"
    ? "held as asked"
    : span < 2
    ? "held: data span under two orbits"
    : "fitted";
  const free = state === "fitted";

  // Parameters: K and γ of each star (one γ when shared), phase of conjunction at the middle, rate.
  const shared = systemic === "shared" && curves.length === 2;
  const indices = curves.map((_, c) => ({ k: 2 * c, systemic: shared ? 1 : 2 * c + 1 }));
  const size = shared ? 5 : 2 * curves.length + 2;
  // Order when shared: K₁, γ, K₂.
  const [zero, rate] = [size - 2, size - 1];
  const first = alone[0]!;
  const start = new Float64Array(size);
  curves.forEach((_, c) => {
    start[indices[c]!.k] = alone[c]!.k_kms;
    start[indices[c]!.systemic] = alone[c]!.systemic_kms;
  });
  start[zero] = first.crossing_phase - HALF_TURN[curves[0]!.star] - middle;
  start[rate] = 1;
  start[zero] = start[zero]! - Math.round(start[zero]!);

  const counts = used.map((curve) => curve.orbits.length);
  const total = counts.reduce((sum, n) => sum + n, 0);
  const prior = free && period_prior > 0;
  const residuals = (p: Float64Array) => {
    const out = new Float64Array(total + (prior ? 1 : 0));
    let n = 0;
    used.forEach((curve, c) => {
      const k = p[indices[c]!.k]!, gamma = p[indices[c]!.systemic]!;
      const turn = p[zero]! + HALF_TURN[curve.star];
      curve.orbits.forEach((x, i) => {
        const factor = smearFactor(curve.exposure_orbits[i]!);
        const model = gamma +
          k * factor * Math.sin(TWO_PI * (p[rate]! * (x - middle) - turn));
        out[n++] = (curve.velocity_kms[i]! - model) / curve.error_kms[i]!;
      });
    });
    if (prior) out[n] = (1 / p[rate]! - 1) / period_prior;
    return out;
  };
  const bounds = { lower: start.map(() => -Infinity), upper: start.map(() => Infinity) };
  if (!free) bounds.lower[rate] = bounds.upper[rate] = 1;
  const jacobian = (p: Float64Array) => {
    const out = new Float64Array((total + (prior ? 1 : 0)) * size);
    let n = 0;
    used.forEach((curve, c) => {
      const k = p[indices[c]!.k]!;
      const turn = p[zero]! + HALF_TURN[curve.star];
      curve.orbits.forEach((x, i) => {
        const scale = -1 / curve.error_kms[i]!;
        const factor = scale * smearFactor(curve.exposure_orbits[i]!);
        const angle = TWO_PI * (p[rate]! * (x - middle) - turn);
        const row = size * n++;
        out[row + indices[c]!.k] = factor * Math.sin(angle);
        out[row + indices[c]!.systemic] = scale;
        out[row + zero] = -TWO_PI * k * factor * Math.cos(angle);
        out[row + rate] = TWO_PI * (x - middle) * k * factor * Math.cos(angle);
      });
    });
    if (prior) out[size * n + rate] = -1 / (p[rate]! ** 2 * period_prior);
    return out;
  };
  const fit = minimise(residuals, start, { ...bounds, jacobian });

  const { parameters, covariance } = fit;
  const f = parameters[rate]!;
  const nearest = -Math.round(parameters[zero]!);
  const phase = parameters[zero]! + nearest;
  const period_ratio = 1 / f;
  const variance = (i: number, j: number) => covariance.get(i, j);
  // x = middle + phase/f: to first order in (phase, f).
  const [dz, df] = [1 / f, -phase / (f * f)];
  const conjunction_variance = dz * dz * variance(zero, zero) + 2 * dz * df * variance(zero, rate) +
    df * df * variance(rate, rate);
  const result: OrbitFit = {
    stars: curves.map((curve, c) => ({
      star: curve.star,
      line: curve.line,
      method: curve.method,
      k_kms: parameters[indices[c]!.k]!,
      k_error_kms: Math.sqrt(variance(indices[c]!.k, indices[c]!.k)),
      systemic_kms: parameters[indices[c]!.systemic]!,
      systemic_error_kms: Math.sqrt(variance(indices[c]!.systemic, indices[c]!.systemic)),
      jitter_kms: alone[c]!.jitter_kms,
      k_index: indices[c]!.k,
      systemic_index: indices[c]!.systemic,
    })),
    conjunction_orbits: middle + phase / f,
    conjunction_error_orbits: Math.sqrt(conjunction_variance),
    period_ratio,
    period_ratio_error: Math.sqrt(variance(rate, rate)) / (f * f),
    conjunction_period_covariance: -(dz * variance(zero, rate) + df * variance(rate, rate)) /
      (f * f),
    period: state,
    covariance,
    chi_square: fit.chi_square,
    degrees_of_freedom: total - size + (free ? 0 : 1),
  };
  if (!fit.converged) {
    throw new NotConverged(
      `Cannot fit orbit: no minimum after ${fit.iterations} iterations, chi-square ${fit.chi_square}`,
      result,
    );
  }
  return result;
}
