import { Matrix } from "ml-matrix";
import { trueAnomaly } from "../binary/mod.ts";
import { fTail, minimise } from "../numerics/mod.ts";
import { InputError } from "../errors.ts";
import { type CircularFit, fitCircular } from "./circular_fit.ts";
import { solveInPlace } from "./small_system.ts";
import { measuredOnly, type VelocityCurve } from "./velocity_curve.ts";

/** An eccentric orbit, with the test that decides whether to believe it. */
export interface EccentricFit {
  /** e. */
  readonly eccentricity: number;
  /** Its standard deviation. */
  readonly eccentricity_error: number;
  /** ω, longitude of the star's periastron, degrees in [0, 360). */
  readonly periastron_deg: number;
  /** Orbits since the zero at which the star passes periastron, in [0, 1). */
  readonly periastron_phase: number;
  /** K, km/s. */
  readonly k_kms: number;
  /** γ, km/s. */
  readonly systemic_kms: number;
  /** Chi-square. */
  readonly chi_square: number;
  /** Chance that a circular orbit looks at least this eccentric (Lucy & Sweeney 1971). */
  readonly probability_if_circular: number;
  /** Whether that chance is below 5 %: only then is the orbit to be called eccentric. */
  readonly significant: boolean;
  /** The circular orbit, errors as stated, to be used otherwise. */
  readonly circular: CircularFit;
}

/**
 * Fits an eccentric orbit of known period and tests it: Lucy & Sweeney (1971, AJ 76, 544) compare
 * the improvement of chi-square over the circular orbit, for two more parameters, with what is left
 * (an F test with 2 and N − 5 degrees of freedom; their N − 6 counts a fitted period). Nearly every
 * orbit fits better with some eccentricity; one above 5 % by that test is not to be believed.
 *
 * Exposures are taken as instants.
 *
 * @param curve Velocities; those not measured are left out.
 * @returns The orbit and the test.
 * @throws {InputError} When velocities are fewer than 7 or the phases do not spread.
 *
 * @example A circular orbit stays circular
 * ```ts
 * import { fitEccentric } from "@millrace/millrace/orbit";
 * import { assert } from "@std/assert";
 *
 * const orbits = Float64Array.from({ length: 20 }, (_, k) => k / 20);
 * const noise = (k: number) => 8 * Math.sin(12.3 * k * k);
 * const fit = fitEccentric({
 *   line: "Na I 8190", method: "cross-correlation", star: "donor",
 *   orbits, exposure_orbits: new Float64Array(20),
 *   velocity_kms: orbits.map((x, k) => 30 + 320 * Math.sin(2 * Math.PI * x) + noise(k)),
 *   error_kms: new Float64Array(20).fill(6),
 * });
 * assert(!fit.significant);
 * ```
 */
export function fitEccentric(curve: VelocityCurve): EccentricFit {
  const circular = fitCircular(curve, { scatter: "stated", smear: false });
  const { orbits, velocity_kms, error_kms } = measuredOnly(curve);
  const count = orbits.length;
  if (count < 7) {
    throw new InputError({
      action: "fit eccentric orbit",
      rule: "it takes at least 7 velocities",
      value: count,
      remedy: "use the circular orbit",
    });
  }
  const weight = error_kms.reduce((sum, e) => sum + 1 / (e * e), 0);
  // For given e and time of periastron the rest is linear: V = γ + K (cos(ν + ω) + e cos ω).
  const linear = (e: number, periastron: number) => {
    const normal = new Float64Array(9), right = new Float64Array(3);
    const rows = Array.from(orbits, (x, k) => {
      const nu = trueAnomaly(2 * Math.PI * (x - periastron), e);
      const row = [1, Math.cos(nu) + e, -Math.sin(nu)];
      for (let i = 0; i < 3; i++) {
        right[i]! += row[i]! * velocity_kms[k]! / error_kms[k]! ** 2 / weight;
        for (let j = 0; j <= i; j++) {
          normal[3 * i + j]! += row[i]! * row[j]! / error_kms[k]! ** 2 / weight;
        }
      }
      return row;
    });
    solveInPlace(normal, right, 3);
    return { rows, coefficients: right };
  };
  // h = √e cos, √e sin of the periastron's phase: smooth through e = 0.
  const shape = (p: Float64Array) => ({
    e: Math.min(0.98, p[0]! ** 2 + p[1]! ** 2),
    periastron: Math.atan2(p[1]!, p[0]!) / (2 * Math.PI),
  });
  const residuals = (p: Float64Array) => {
    const { e, periastron } = shape(p);
    const { rows, coefficients } = linear(e, periastron);
    return velocity_kms.map((v, k) => {
      const model = coefficients.reduce((sum, c, j) => sum + c * rows[k]![j]!, 0);
      return (v - model) / error_kms[k]!;
    });
  };
  let best: { p: Float64Array; chi_square: number; covariance: Matrix } | undefined;
  for (const e of [0.1, 0.5]) {
    for (let k = 0; k < 5; k++) {
      const turn = 2 * Math.PI * k / 5, h = Math.sqrt(e);
      const start = Float64Array.of(h * Math.cos(turn), h * Math.sin(turn));
      const fit = minimise(residuals, start, { typical: [0.1, 0.1], tolerance: 1e-8 });
      if (best && fit.chi_square >= best.chi_square) continue;
      const covariance = new Matrix(fit.covariance.to2DArray());
      best = { p: fit.parameters, chi_square: fit.chi_square, covariance };
    }
  }
  const { p, chi_square, covariance } = best!;
  const { e: eccentricity, periastron } = shape(p);
  const [systemic_kms, c, s] = linear(eccentricity, periastron)
    .coefficients as unknown as [
      number,
      number,
      number,
    ];
  const [gx, gy] = [2 * p[0]!, 2 * p[1]!];
  const variance = gx * gx * covariance.get(0, 0) + 2 * gx * gy * covariance.get(0, 1) +
    gy * gy * covariance.get(1, 1);
  const spare = count - 5;
  const f = Math.max(0, circular.chi_square - chi_square) / 2 / (chi_square / spare);
  const probability_if_circular = fTail(f, { dof1: 2, dof2: spare });
  const omega = Math.atan2(s, c) * 180 / Math.PI;
  return {
    eccentricity,
    eccentricity_error: Math.sqrt(variance),
    periastron_deg: (omega + 360) % 360,
    periastron_phase: (periastron + 1) % 1,
    k_kms: Math.hypot(c, s),
    systemic_kms,
    chi_square,
    probability_if_circular,
    significant: probability_if_circular < 0.05,
    circular,
  };
}
