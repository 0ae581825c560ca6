import { lobeRadius, lobeRadiusEggleton, lobeRadiusPaczynski } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { findRoot } from "../numerics/mod.ts";

/** Which radius the donor's lobe is given: that of its exact volume, or a published formula's. */
export type LobeFormula = "exact" | "eggleton" | "paczynski";

const RADIUS: Readonly<Record<LobeFormula, (mass_ratio: number) => number>> = {
  exact: (mass_ratio) => lobeRadius(mass_ratio),
  eggleton: lobeRadiusEggleton,
  paczynski: lobeRadiusPaczynski,
};

/**
 * v sin i over K2 of a donor that fills its lobe and turns with the orbit: (1+q)·R2/a. With
 * Paczyński's radius it is 0.462 q^⅓ (1+q)^⅔ (Wade & Horne 1988, ApJ 324, 411).
 *
 * @param mass_ratio q = M2/M1.
 * @param options Which radius.
 * @returns The ratio.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { rotationRatio } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const ratio = rotationRatio(0.2, { lobe: "paczynski" });
 * assertAlmostEquals(ratio, 0.462 * 0.2 ** (1 / 3) * 1.2 ** (2 / 3), 1e-12);
 * ```
 */
export function rotationRatio(mass_ratio: number, options: {
  /** @default {"exact"} */
  readonly lobe?: LobeFormula;
} = {}): number {
  return (1 + mass_ratio) * RADIUS[options.lobe ?? "exact"](mass_ratio);
}

/** A mass ratio from rotation. */
export interface RotationMassRatio {
  /** q = M2/M1. */
  readonly mass_ratio: number;
  /** Its standard deviation to first order. */
  readonly mass_ratio_error: number;
}

/**
 * Mass ratio from the donor's rotation: the q at which a lobe-filling donor that turns with the
 * orbit has the measured v sin i over K2.
 *
 * @param v_sin_i_kms Projected speed of rotation, km/s.
 * @param k_donor_kms K2, km/s.
 * @param options Errors and radius.
 * @returns Mass ratio and error.
 * @throws {InputError} When a speed is not positive, or no mass ratio in [0.001, 20] fits.
 *
 * @example
 * ```ts
 * import { massRatioFromRotation, rotationRatio } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { mass_ratio } = massRatioFromRotation(300 * rotationRatio(0.35), 300);
 * assertAlmostEquals(mass_ratio, 0.35, 1e-8);
 * ```
 */
export function massRatioFromRotation(
  v_sin_i_kms: number,
  k_donor_kms: number,
  options: {
    /** Standard deviation of v sin i, km/s. @default {0} */
    readonly v_sin_i_error_kms?: number;
    /** Standard deviation of K2, km/s. @default {0} */
    readonly k_donor_error_kms?: number;
    /** @default {"exact"} */
    readonly lobe?: LobeFormula;
  } = {},
): RotationMassRatio {
  const { v_sin_i_error_kms = 0, k_donor_error_kms = 0, lobe = "exact" } = options;
  const action = "find mass ratio from rotation";
  for (const [key, value] of Object.entries({ v_sin_i_kms, k_donor_kms })) {
    if (value > 0 && value < Infinity) continue;
    throw new InputError({ action, rule: `${key} must be positive`, value, unit: "km/s", key });
  }
  const wanted = v_sin_i_kms / k_donor_kms;
  const off = (ln_q: number) => rotationRatio(Math.exp(ln_q), { lobe }) - wanted;
  const [low, high] = [Math.log(1e-3), Math.log(20)];
  if (off(low) > 0 || off(high) < 0) {
    throw new InputError({
      action,
      rule: `v sin i over K2 must lie between ${(off(low) + wanted).toFixed(3)} and ` +
        `${(off(high) + wanted).toFixed(3)} (mass ratios 0.001 to 20)`,
      value: wanted,
      key: "v_sin_i_kms",
    });
  }
  const mass_ratio = Math.exp(findRoot(off, [low, high], { tolerance: 1e-12 }));
  const h = 1e-4;
  const slope = (rotationRatio(mass_ratio * (1 + h), { lobe }) -
    rotationRatio(mass_ratio * (1 - h), { lobe })) / (2 * h * mass_ratio);
  const error = Math.hypot(v_sin_i_error_kms, wanted * k_donor_error_kms) / k_donor_kms;
  return { mass_ratio, mass_ratio_error: error / slope };
}

/**
 * Mass ratio from a superhump period excess ε = (P_sh − P)/P by ε = 0.18 q + 0.29 q² (Patterson et al.
 * 2005, PASP 117, 1204; coefficients from memory). An empirical relation with a scatter of about a
 * tenth: an option, no substitute for velocities.
 *
 * @param excess ε, positive.
 * @returns q = M2/M1.
 * @throws {InputError} When the excess is not in (0, 0.2].
 *
 * @example
 * ```ts
 * import { massRatioFromSuperhumps } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(massRatioFromSuperhumps(0.18 * 0.15 + 0.29 * 0.15 ** 2), 0.15, 1e-12);
 * ```
 */
export function massRatioFromSuperhumps(excess: number): number {
  if (!(excess > 0 && excess <= 0.2)) {
    throw new InputError({
      action: "find mass ratio from superhumps",
      rule: "the period excess must be in (0, 0.2]",
      value: excess,
      key: "superhump_excess",
    });
  }
  return (Math.sqrt(0.18 ** 2 + 4 * 0.29 * excess) - 0.18) / (2 * 0.29);
}
