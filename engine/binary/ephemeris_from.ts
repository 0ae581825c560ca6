import { InputError } from "../errors.ts";
import type { SplitDate } from "../sky/mod.ts";
import type { Ephemeris, ZeroMark } from "./ephemeris.ts";

/** What an ephemeris is made of; what is left out is exact or zero. */
export interface EphemerisOptions {
  /** Orbital period, d. */
  readonly period_d: number;
  /** Zero of phase, BJD(TDB): one number, or in two parts for more than 40 µs. */
  readonly zero_bjd_tdb: number | SplitDate;
  /** Standard deviation of the period, d. @default {0} */
  readonly period_error_d?: number;
  /** Standard deviation of the zero, d. @default {0} */
  readonly zero_error_d?: number;
  /** Covariance of zero and period, d². @default {0} */
  readonly covariance_d2?: number;
  /** dP/dt, dimensionless. @default {0} */
  readonly period_derivative?: number;
  /** What the zero marks. @default {"donor-conjunction"} */
  readonly zero_marks?: ZeroMark;
}

/**
 * An ephemeris from a period and a zero.
 *
 * @param options Period, zero, and what is known of their errors.
 * @returns The ephemeris.
 * @throws {InputError} When the period is not positive or the zero is no full Julian date.
 *
 * @example
 * ```ts
 * import { ephemerisFrom, orbitalPhase } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const ephemeris = ephemerisFrom({ period_d: 0.1, zero_bjd_tdb: 2460311.62107 });
 * assertAlmostEquals(orbitalPhase(ephemeris, [2460311, 0.64607]).phase, 0.25, 1e-6);
 * ```
 */
export function ephemerisFrom(options: EphemerisOptions): Ephemeris {
  const { period_d, zero_bjd_tdb } = options;
  const action = "make ephemeris";
  if (!(period_d > 0 && period_d < Infinity)) {
    throw new InputError({
      action,
      rule: "the period must be positive",
      value: period_d,
      unit: "d",
      key: "period_d",
    });
  }
  const zero: SplitDate = typeof zero_bjd_tdb === "number"
    ? [Math.floor(zero_bjd_tdb), zero_bjd_tdb - Math.floor(zero_bjd_tdb)]
    : zero_bjd_tdb;
  const sum = zero[0] + zero[1];
  if (!(sum > 2_400_000 && sum < 2_500_000)) {
    throw new InputError({
      action,
      rule: "the zero must be a full Julian date, from 2400000 to 2500000",
      value: sum,
      unit: "d",
      key: "zero_bjd_tdb",
    });
  }
  return {
    period_d,
    period_error_d: options.period_error_d ?? 0,
    zero,
    zero_error_d: options.zero_error_d ?? 0,
    covariance_d2: options.covariance_d2 ?? 0,
    period_derivative: options.period_derivative ?? 0,
    zero_marks: options.zero_marks ?? "donor-conjunction",
  };
}
