import type { SplitDate } from "../sky/mod.ts";

/** What the zero of an ephemeris really is. */
export type ZeroMark = "donor-conjunction" | "mid-eclipse" | "emission-crossing";

/** A linear or quadratic ephemeris: T(E) = zero + period·E + ½·period·derivative·E². */
export interface Ephemeris {
  /** Period at the zero, d. */
  readonly period_d: number;
  /** Its standard deviation, d. */
  readonly period_error_d: number;
  /** Zero of phase, BJD(TDB). */
  readonly zero: SplitDate;
  /** Its standard deviation, d. */
  readonly zero_error_d: number;
  /** Covariance of zero and period, d². */
  readonly covariance_d2: number;
  /** Period derivative dP/dt, dimensionless. */
  readonly period_derivative: number;
  /** What the zero marks. Map marks need "donor-conjunction" or "mid-eclipse". */
  readonly zero_marks: ZeroMark;
}
