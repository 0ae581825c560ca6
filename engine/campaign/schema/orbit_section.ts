import { z } from "zod";
import { julianDate, nonNegative, number, positive, range } from "./common.ts";

/** `[orbit]`: the ephemeris and the systemic velocity. */
export interface OrbitSettings {
  /** Orbital period, d. */
  readonly period_d?: number;
  /** Range to search for the period, d. */
  readonly period_range_d?: readonly [number, number];
  /** Standard deviation of the period, d. */
  readonly period_error_d?: number;
  /** Zero of phase, BJD(TDB). */
  readonly zero_bjd_tdb?: number;
  /** Zero of phase, heliocentric Julian date in UTC. */
  readonly zero_hjd_utc?: number;
  /** Zero of phase, heliocentric Julian date in TT. */
  readonly zero_hjd_tt?: number;
  /** Standard deviation of the zero, d. */
  readonly zero_error_d?: number;
  /** Covariance of zero and period, d². */
  readonly zero_period_covariance_d2: number;
  /** What the zero marks. */
  readonly zero_marks: "donor-conjunction" | "mid-eclipse" | "emission-crossing";
  /** dP/dt, dimensionless. */
  readonly period_derivative: number;
  /** Systemic velocity, km/s, or "search". */
  readonly systemic_kms?: number | "search";
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms?: number;
  /**
   * What was known before the rest was measured from the exposures: `orbit` starts from it, so that
   * measuring again counts no exposure twice.
   */
  readonly before?: Omit<OrbitSettings, "systemic_kms" | "systemic_error_kms" | "before">;
}

const ephemeris = {
  period_d: positive.optional(),
  period_range_d: range.refine(([low]) => low > 0, { error: "must be positive" }).optional(),
  period_error_d: nonNegative.optional(),
  zero_bjd_tdb: julianDate.optional(),
  zero_hjd_utc: julianDate.optional(),
  zero_hjd_tt: julianDate.optional(),
  zero_error_d: nonNegative.optional(),
  zero_period_covariance_d2: number.default(0),
  zero_marks: z.enum(["donor-conjunction", "mid-eclipse", "emission-crossing"]).default(
    "donor-conjunction",
  ),
  period_derivative: number.default(0),
};

function onceEach(
  orbit: Pick<
    OrbitSettings,
    "period_d" | "period_range_d" | "zero_bjd_tdb" | "zero_hjd_utc" | "zero_hjd_tt"
  >,
  context: z.RefinementCtx,
): void {
  const zeros = (["zero_bjd_tdb", "zero_hjd_utc", "zero_hjd_tt"] as const)
    .filter((key) => orbit[key] !== undefined);
  if (zeros.length > 1) {
    context.addIssue({
      code: "custom",
      path: [zeros[1]!],
      message: `must not stand beside ${zeros[0]}: give the zero of phase once`,
    });
  }
  if (orbit.period_d !== undefined && orbit.period_range_d !== undefined) {
    context.addIssue({
      code: "custom",
      path: ["period_range_d"],
      message: "must not stand beside period_d: give one of them",
    });
  }
}

/** Schema of OrbitSettings. */
export const orbitSection: z.ZodType<OrbitSettings> = z.strictObject({
  ...ephemeris,
  systemic_kms: z.union([number, z.literal("search")], {
    error: 'must be a number or "search"',
  }).optional(),
  systemic_error_kms: nonNegative.optional(),
  before: z.strictObject(ephemeris).superRefine(onceEach).optional(),
}).superRefine(onceEach);
