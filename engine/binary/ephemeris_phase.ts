import { daysBetween, type SplitDate } from "../sky/mod.ts";
import { InputError } from "../errors.ts";
import type { Ephemeris } from "./ephemeris.ts";

/** An instant told in orbits. */
export interface OrbitalPhase {
  /** Whole orbits since the zero. */
  readonly cycle: number;
  /** Rest in [0, 1), cycles. */
  readonly phase: number;
}

/** Throws unless the ephemeris can number orbits. */
function requirePeriod(ephemeris: Ephemeris): void {
  if (ephemeris.period_d > 0 && Number.isFinite(ephemeris.period_d)) return;
  throw new InputError({
    action: "compute phase",
    rule: "the period must be positive",
    value: ephemeris.period_d,
    unit: "d",
    key: "period_d",
  });
}

/**
 * Orbits since the zero of an ephemeris, whole and fraction together: the E that solves
 * T(E) = zero + P·E + ½·P·Ṗ·E².
 *
 * @param ephemeris The ephemeris.
 * @param instant BJD(TDB).
 * @returns E, cycles; negative before the zero.
 * @throws {InputError} When the period is not positive, or the quadratic ephemeris never reaches
 * the instant.
 *
 * @example
 * ```ts
 * import { type Ephemeris, orbitsSinceZero } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const ephemeris: Ephemeris = {
 *   period_d: 0.1, period_error_d: 0, zero: [2460000, 0.5], zero_error_d: 0,
 *   covariance_d2: 0, period_derivative: 0, zero_marks: "donor-conjunction",
 * };
 * assertAlmostEquals(orbitsSinceZero(ephemeris, [2460001, 0.525]), 10.25, 1e-9);
 * ```
 */
export function orbitsSinceZero(ephemeris: Ephemeris, instant: SplitDate): number {
  requirePeriod(ephemeris);
  const orbits = daysBetween(instant, ephemeris.zero) / ephemeris.period_d;
  const discriminant = 1 + 2 * ephemeris.period_derivative * orbits;
  if (discriminant <= 0) {
    throw new InputError({
      action: "compute phase",
      rule: "an ephemeris must reach every exposure, and with this period derivative it never does",
      value: ephemeris.period_derivative,
      key: "period_derivative",
    });
  }
  // The stable form of the quadratic's root: no cancellation for a small derivative.
  return 2 * orbits / (1 + Math.sqrt(discriminant));
}

/**
 * Cycle number and phase of an instant.
 *
 * @param ephemeris The ephemeris; its quadratic term is used.
 * @param instant BJD(TDB).
 * @returns Cycle and phase; `cycle + phase` is the time since the zero in orbits.
 * @throws {InputError} When the period is not positive, or the quadratic ephemeris never reaches
 * the instant.
 *
 * @example
 * ```ts
 * import { type Ephemeris, orbitalPhase } from "@millrace/millrace/binary";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const ephemeris: Ephemeris = {
 *   period_d: 0.1, period_error_d: 0, zero: [2460000, 0.5], zero_error_d: 0,
 *   covariance_d2: 0, period_derivative: 0, zero_marks: "donor-conjunction",
 * };
 * const { cycle, phase } = orbitalPhase(ephemeris, [2460000, 0.475]);
 * assertEquals(cycle, -1);
 * assertAlmostEquals(phase, 0.75, 1e-9);
 * ```
 */
export function orbitalPhase(ephemeris: Ephemeris, instant: SplitDate): OrbitalPhase {
  const orbits = orbitsSinceZero(ephemeris, instant);
  const cycle = Math.floor(orbits);
  const phase = orbits - cycle;
  // A tiny negative remainder rounds to 1; phases lie in [0, 1).
  return phase < 1 ? { cycle, phase } : { cycle: cycle + 1, phase: 0 };
}

/**
 * Standard deviation of the phase that an ephemeris gives at an instant, from the errors of zero
 * and period and their covariance. The period derivative is taken as exact.
 *
 * @param ephemeris The ephemeris.
 * @param instant BJD(TDB), such as the middle of the data.
 * @returns Error of phase, cycles.
 * @throws {InputError} When the period is not positive, or the covariance exceeds what the two
 * errors allow.
 *
 * @example A period error grows with the count of orbits
 * ```ts
 * import { type Ephemeris, phaseError } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const ephemeris: Ephemeris = {
 *   period_d: 0.1, period_error_d: 1e-6, zero: [2460000, 0], zero_error_d: 0,
 *   covariance_d2: 0, period_derivative: 0, zero_marks: "donor-conjunction",
 * };
 * assertAlmostEquals(phaseError(ephemeris, [2460100, 0]), 0.01, 1e-9);
 * ```
 */
export function phaseError(ephemeris: Ephemeris, instant: SplitDate): number {
  const orbits = orbitsSinceZero(ephemeris, instant);
  return Math.sqrt(timeVariance(ephemeris, orbits)) / ephemeris.period_d;
}

/** Variance of T(E), d². */
function timeVariance(ephemeris: Ephemeris, orbits: number): number {
  const { period_error_d, zero_error_d, covariance_d2 } = ephemeris;
  const limit = period_error_d * zero_error_d;
  if (Math.abs(covariance_d2) > limit * (1 + 1e-9)) {
    throw new InputError({
      action: "compute error of phase",
      rule:
        `the covariance of zero and period cannot exceed the product of their errors, ${limit} d2`,
      value: covariance_d2,
      unit: "d2",
      key: "covariance_d2",
    });
  }
  const variance = zero_error_d ** 2 + 2 * orbits * covariance_d2 + (orbits * period_error_d) ** 2;
  return Math.max(0, variance);
}

/**
 * The instant at which a number of orbits have passed since the zero: the inverse of
 * {@linkcode orbitsSinceZero}.
 *
 * @param ephemeris The ephemeris; its quadratic term is used.
 * @param orbits Orbits since the zero, whole or not.
 * @returns BJD(TDB), its fraction in [0, 1).
 * @throws {InputError} When the period is not positive.
 *
 * @example
 * ```ts
 * import { type Ephemeris, instantOf } from "@millrace/millrace/binary";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const ephemeris: Ephemeris = {
 *   period_d: 0.1, period_error_d: 0, zero: [2460000, 0.9], zero_error_d: 0,
 *   covariance_d2: 0, period_derivative: 0, zero_marks: "donor-conjunction",
 * };
 * const [whole, fraction] = instantOf(ephemeris, 2.5);
 * assertEquals(whole, 2460001);
 * assertAlmostEquals(fraction, 0.15, 1e-12);
 * ```
 */
export function instantOf(ephemeris: Ephemeris, orbits: number): SplitDate {
  requirePeriod(ephemeris);
  const { period_d, period_derivative, zero } = ephemeris;
  const days = period_d * orbits * (1 + period_derivative * orbits / 2);
  const whole = Math.floor(days);
  const fraction = zero[1] + (days - whole);
  const carry = Math.floor(fraction);
  return [zero[0] + whole + carry, fraction - carry];
}

/**
 * The same ephemeris with its zero a whole number of orbits later (or earlier): phases stay, cycle
 * numbers change; errors and covariance are carried along.
 *
 * @param ephemeris The ephemeris.
 * @param orbits Whole number of orbits.
 * @returns A new ephemeris.
 * @throws {InputError} When the number is not whole or the period not positive.
 *
 * @example
 * ```ts
 * import { type Ephemeris, moveZero } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const ephemeris: Ephemeris = {
 *   period_d: 0.1, period_error_d: 1e-6, zero: [2460000, 0], zero_error_d: 0,
 *   covariance_d2: 0, period_derivative: 0, zero_marks: "donor-conjunction",
 * };
 * const later = moveZero(ephemeris, 1000);
 * assertAlmostEquals(later.zero[0] - 2460000 + later.zero[1], 100, 1e-12);
 * assertAlmostEquals(later.zero_error_d, 1e-3, 1e-15);
 * ```
 */
export function moveZero(ephemeris: Ephemeris, orbits: number): Ephemeris {
  requirePeriod(ephemeris);
  if (!Number.isSafeInteger(orbits)) {
    throw new InputError({
      action: "move zero of phase",
      rule: "it must move by a whole number of orbits",
      value: orbits,
    });
  }
  const { period_d, period_error_d, covariance_d2, period_derivative } = ephemeris;
  const drift = 1 + period_derivative * orbits;
  return {
    ...ephemeris,
    zero: instantOf(ephemeris, orbits),
    zero_error_d: Math.sqrt(timeVariance(ephemeris, orbits)),
    period_d: period_d * drift,
    period_error_d: period_error_d * drift,
    covariance_d2: (covariance_d2 + orbits * period_error_d ** 2) * drift,
    period_derivative: period_derivative / drift,
  };
}

/**
 * Orbits from the zero to the epoch at which zero and period are uncorrelated, E = −cov/σ_P²: there
 * the error of the zero is smallest. Near the middle of the data, as a rule.
 *
 * @param ephemeris The ephemeris.
 * @returns E, cycles; 0 when the period has no error.
 *
 * @example
 * ```ts
 * import { decorrelatedOrbit, type Ephemeris, moveZero } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const ephemeris: Ephemeris = {
 *   period_d: 0.1, period_error_d: 1e-6, zero: [2460000, 0], zero_error_d: 1e-3,
 *   covariance_d2: -5e-10, period_derivative: 0, zero_marks: "donor-conjunction",
 * };
 * const best = moveZero(ephemeris, Math.round(decorrelatedOrbit(ephemeris)));
 * assertAlmostEquals(best.covariance_d2, 0, 1e-20);
 * ```
 */
export function decorrelatedOrbit(ephemeris: Ephemeris): number {
  const { covariance_d2, period_error_d } = ephemeris;
  return period_error_d > 0 ? (0 - covariance_d2) / period_error_d ** 2 : 0;
}
