import { type Ephemeris, instantOf, moveZero, orbitsSinceZero, phaseError } from "../binary/mod.ts";
import type { OrbitFit } from "./orbit_fit.ts";

/**
 * The ephemeris that an orbit fit gives: conjunction nearest the middle of the data, period,
 * errors and covariance.
 *
 * @param fit The fit, whose times are orbits of `base`.
 * @param base The ephemeris that the fit was made on.
 * @param zero_marks What its zero is.
 * @returns A new ephemeris.
 */
export function ephemerisOf(
  fit: OrbitFit,
  base: Ephemeris,
  zero_marks: Ephemeris["zero_marks"],
): Ephemeris {
  const { period_d, period_derivative } = base;
  const drift = 1 + period_derivative * fit.conjunction_orbits;
  const free = fit.period === "fitted";
  return {
    period_d: period_d * drift * fit.period_ratio,
    period_error_d: free ? period_d * drift * fit.period_ratio_error : base.period_error_d,
    zero: instantOf(base, fit.conjunction_orbits),
    zero_error_d: fit.conjunction_error_orbits * period_d,
    covariance_d2: free ? fit.conjunction_period_covariance * period_d ** 2 : 0,
    period_derivative,
    zero_marks,
  };
}

/**
 * The better of two ephemerides at an instant: the one whose phase there has the smaller error.
 *
 * @param known An ephemeris from elsewhere; an error of 0 counts as unknown.
 * @param fitted One fitted to the data.
 * @param orbits Instant, in orbits of `known`.
 * @returns Whether the fitted one is to be used.
 */
export function fittedIsBetter(known: Ephemeris, fitted: Ephemeris, orbits: number): boolean {
  if (known.zero_marks === "emission-crossing" || known.zero_error_d === 0) return true;
  const instant = instantOf(known, orbits);
  return phaseError(fitted, instant) < phaseError(known, instant);
}

/**
 * Zero of one ephemeris on another, cycles in (−½, ½].
 *
 * @param one The ephemeris whose zero is asked for.
 * @param other The ephemeris that tells its phase.
 * @returns Difference of phase.
 */
export function zeroShift(one: Ephemeris, other: Ephemeris): number {
  const orbits = orbitsSinceZero(other, one.zero);
  const shift = orbits - Math.round(orbits);
  return shift === -0.5 ? 0.5 : shift;
}

/**
 * The same ephemeris with a zero in the cycle nearest an instant, where its cycle numbers are small.
 *
 * @param ephemeris The ephemeris.
 * @param instant The instant, BJD(TDB).
 * @returns A new ephemeris.
 */
export function zeroNear(ephemeris: Ephemeris, instant: Ephemeris["zero"]): Ephemeris {
  return moveZero(ephemeris, Math.round(orbitsSinceZero(ephemeris, instant)));
}
