import { Matrix } from "ml-matrix";
import { type DenseMatrix, findRoot, median, solveLeastSquares } from "../numerics/mod.ts";
import { requirePhaseSpread } from "./phase_spread.ts";
import {
  measuredOnly,
  requireVelocities,
  smearFactor,
  type VelocityCurve,
} from "./velocity_curve.ts";

/**
 * What to do when velocities scatter more than their errors say: nothing ("stated"), add a constant
 * to them in quadrature until they do not ("jitter"), or multiply the errors ("scale"). Errors are
 * never made smaller.
 */
export type ScatterRule = "stated" | "jitter" | "scale";

/** A circular orbit V = γ + K sin 2π(x − x₀), x in orbits since the zero of the ephemeris. */
export interface CircularFit {
  /** γ, km/s. */
  readonly systemic_kms: number;
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms: number;
  /** K ≥ 0, km/s. */
  readonly k_kms: number;
  /** Its standard deviation, km/s. */
  readonly k_error_kms: number;
  /** Phase x₀ in [0, 1) at which the velocity crosses γ upwards: 0 for the donor, ½ for the accretor. */
  readonly crossing_phase: number;
  /** Its standard deviation, cycles. */
  readonly crossing_phase_error: number;
  /** γ, A, B of V = γ + A sin 2πx + B cos 2πx, km/s. */
  readonly harmonics_kms: Float64Array;
  /** Covariance of γ, A, B, 3 × 3, (km/s)². */
  readonly covariance: DenseMatrix;
  /** Chi-square with the errors as stated. */
  readonly chi_square: number;
  /** Chi-square of the best constant velocity, errors as stated. */
  readonly chi_square_constant: number;
  /** Velocities less parameters. */
  readonly degrees_of_freedom: number;
  /** Added in quadrature to the errors, km/s; 0 when none. */
  readonly jitter_kms: number;
  /** Factor on the errors; 1 when none. */
  readonly error_scale: number;
  /** Velocities given almost no weight by the robust fit, and how many were used. */
  readonly outliers: number;
  /** Velocities used. */
  readonly sample_count: number;
}

/** Options of {@linkcode fitCircular}. */
export interface CircularFitOptions {
  /** What to do about excess scatter. @default {"jitter"} */
  readonly scatter?: ScatterRule;
  /** Whether outliers lose their weight (Tukey's biweight, 4.685 σ). @default {false} */
  readonly robust?: boolean;
  /** Whether the amplitude lost to the length of each exposure is put back. @default {true} */
  readonly smear?: boolean;
}

const TWO_PI = 2 * Math.PI;

/** Rows [1, sin, cos] of the model. */
function designOf(curve: VelocityCurve, smear: boolean): Matrix {
  const rows = Array.from(curve.orbits, (x, k) => {
    const factor = smear ? smearFactor(curve.exposure_orbits[k]!) : 1;
    return [1, factor * Math.sin(TWO_PI * x), factor * Math.cos(TWO_PI * x)];
  });
  return new Matrix(rows);
}

function residualsOf(design: Matrix, velocity: Float64Array, parameters: Float64Array) {
  return velocity.map((v, k) =>
    v - parameters.reduce((sum, p, j) => sum + p * design.get(k, j), 0)
  );
}

/** Weights of Tukey's biweight, by residuals in units of their robust scatter. */
function biweight(u: number): number {
  const share = Math.abs(u) / 4.685;
  return share >= 1 ? 0 : (1 - share * share) ** 2;
}

/**
 * Fits a circular orbit of known period: linear least squares of γ, A and B, weighted by 1/σ².
 * Errors of K and phase are to first order.
 *
 * The amplitude that an exposure of length w loses, sin(πw)/(πw), is part of the model, so K is the
 * star's and not that of the smeared curve. Excess scatter is added as jitter until chi-square
 * equals the degrees of freedom.
 *
 * @param curve Velocities; those not measured are left out.
 * @param options Scatter, robustness, smearing.
 * @returns The orbit.
 * @throws {InputError} When velocities are fewer than 5, an error is not positive, or the phases do
 * not determine an orbit.
 *
 * @example
 * ```ts
 * import { fitCircular } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const orbits = Float64Array.from({ length: 20 }, (_, k) => k / 20);
 * const fit = fitCircular({
 *   line: "Na I 8190", method: "cross-correlation", star: "donor",
 *   orbits, exposure_orbits: new Float64Array(20),
 *   velocity_kms: orbits.map((x) => 30 + 320 * Math.sin(2 * Math.PI * (x - 0.01))),
 *   error_kms: new Float64Array(20).fill(10),
 * });
 * assertAlmostEquals(fit.k_kms, 320, 1e-9);
 * assertAlmostEquals(fit.crossing_phase, 0.01, 1e-12);
 * assertAlmostEquals(fit.k_error_kms, 10 / Math.sqrt(10), 1e-9);
 * ```
 */
export function fitCircular(curve: VelocityCurve, options: CircularFitOptions = {}): CircularFit {
  const { scatter = "jitter", robust = false, smear = true } = options;
  requireVelocities(curve, "fit orbit");
  const used = measuredOnly(curve);
  const design = designOf(used, smear);
  requirePhaseSpread(used.orbits, `fit orbit to ${curve.line} by ${curve.method}`);
  const { velocity_kms, error_kms } = used;
  const count = velocity_kms.length;
  const degrees_of_freedom = count - 3;

  let weight = new Float64Array(count).fill(1);
  let jitter_kms = 0;
  let error_scale = 1;
  const errors = () =>
    error_kms.map((e, k) => error_scale * Math.hypot(e, jitter_kms) / Math.sqrt(weight[k]!));
  const solve = () => solveLeastSquares(design, velocity_kms, { error: errors() });
  let fit = solve();
  const plain = fit.chi_square;

  if (robust) {
    for (let round = 0; round < 50; round++) {
      const off = residualsOf(design, velocity_kms, fit.parameters).map((r, k) =>
        r / error_kms[k]!
      );
      const spread = Math.max(1, 1.482602218505602 * median(off.map(Math.abs)));
      const next = off.map((u) => Math.max(1e-12, biweight(u / spread)));
      const change = Math.max(...next.map((w, k) => Math.abs(w - weight[k]!)));
      weight = next;
      fit = solve();
      if (change < 1e-10) break;
    }
  }
  const effective = weight.reduce((sum, w) => sum + (w > 1e-6 ? 1 : 0), 0) - 3;
  // Normal residuals: E[w u²] = 1 − 6/c² + 15/c⁴ with c = 4.685. The covariance below is 2 % too wide.
  const goal = (robust ? 0.758 : 1) * Math.max(1, effective);
  if (scatter === "scale" && fit.chi_square > goal) {
    error_scale = Math.sqrt(fit.chi_square / goal);
    fit = solve();
  } else if (scatter === "jitter" && fit.chi_square > goal) {
    const excess = (s: number) => {
      jitter_kms = s;
      fit = solve();
      return fit.chi_square - goal;
    };
    let high = median(error_kms);
    while (excess(high) > 0) high *= 2;
    jitter_kms = findRoot(excess, [0, high], { tolerance: 1e-6 * high });
    fit = solve();
  }

  const [systemic_kms, a, b] = fit.parameters as unknown as [number, number, number];
  const { covariance } = fit;
  const k_kms = Math.hypot(a, b);
  const along = (u: readonly number[]) => {
    let sum = 0;
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) sum += u[i]! * u[j]! * covariance.get(i, j);
    }
    return Math.sqrt(sum);
  };
  const mean = solveLeastSquares(Matrix.ones(count, 1), velocity_kms, { error: error_kms });
  const phase = Math.atan2(0 - b, a) / TWO_PI;
  return {
    systemic_kms,
    systemic_error_kms: along([1, 0, 0]),
    k_kms,
    k_error_kms: along([0, a / k_kms, b / k_kms]),
    crossing_phase: phase < 0 ? phase + 1 : phase,
    crossing_phase_error: along([0, b, 0 - a]) / (TWO_PI * k_kms * k_kms),
    harmonics_kms: fit.parameters,
    covariance,
    chi_square: plain,
    chi_square_constant: mean.chi_square,
    degrees_of_freedom,
    jitter_kms,
    error_scale,
    outliers: count - 3 - effective,
    sample_count: count,
  };
}

/**
 * Velocity of a circular orbit at an instant, or averaged over an exposure.
 *
 * @param fit The orbit.
 * @param orbits Orbits since the zero.
 * @param options Length of the exposure.
 * @returns Velocity, km/s.
 *
 * @example
 * ```ts
 * import { circularVelocity } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const fit = { harmonics_kms: Float64Array.of(10, 300, 0) };
 * assertAlmostEquals(circularVelocity(fit, 0.25), 310, 1e-12);
 * ```
 */
export function circularVelocity(
  fit: Pick<CircularFit, "harmonics_kms">,
  orbits: number,
  options: {
    /** Duration, orbits. @default {0} */
    readonly exposure_orbits?: number;
  } = {},
): number {
  const [mean, a, b] = fit.harmonics_kms as unknown as [number, number, number];
  const factor = smearFactor(options.exposure_orbits ?? 0);
  return mean + factor * (a * Math.sin(TWO_PI * orbits) + b * Math.cos(TWO_PI * orbits));
}
