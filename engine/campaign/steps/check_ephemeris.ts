import {
  decorrelatedOrbit,
  type Ephemeris,
  instantOf,
  orbitsSinceZero,
  phaseError,
} from "../../binary/mod.ts";
import type { Warning } from "../../errors.ts";
import type { SplitDate } from "../../sky/mod.ts";
import type { Target } from "../target.ts";

/** The ephemeris on which exposures are folded, as understood. */
export interface EphemerisCheck {
  /** Period at the zero, d. */
  readonly period_d: number;
  /** Its standard deviation, d; null when not given. */
  readonly period_error_d: number | null;
  /** Period derivative dP/dt. */
  readonly period_derivative: number;
  /** Zero of phase, BJD(TDB). */
  readonly zero_bjd_tdb: number;
  /** Its standard deviation, d; null when not given. */
  readonly zero_error_d: number | null;
  /** Key that gave the zero, as in "zero_hjd_utc". */
  readonly zero_from: string;
  /** How much later than the number as given the zero is in BJD(TDB), s. */
  readonly zero_moved_s: number;
  /** What the zero marks. */
  readonly zero_marks: Ephemeris["zero_marks"];
  /** Orbits from the zero to the first exposure. */
  readonly orbits_since_zero: number;
  /** Standard deviation of the phase at the first exposure, cycles; null when an error is not given. */
  readonly phase_error: number | null;
  /** Where zero and period are uncorrelated and the phase is known best, BJD(TDB); null without a covariance. */
  readonly decorrelated_bjd_tdb: number | null;
}

/**
 * Tells how the ephemeris was understood, and how well it knows the phase at the data.
 *
 * @param target The target.
 * @param options The ephemeris and where the data are.
 * @param options.ephemeris The ephemeris.
 * @param options.epoch First mid-exposure, BJD(TDB).
 * @returns The check, and a warning where an error is not given.
 */
export function checkEphemeris(
  target: Target,
  options: { ephemeris: Ephemeris; epoch: SplitDate },
): { check: EphemerisCheck; warnings: Warning[] } {
  const { ephemeris, epoch } = options;
  const { orbit } = target.settings;
  const orbits = orbitsSinceZero(ephemeris, epoch);
  const missing = [
    ...(orbit.period_error_d === undefined ? ["orbit.period_error_d"] : []),
    ...(orbit.zero_error_d === undefined ? ["orbit.zero_error_d"] : []),
  ];
  const sum = ([whole, fraction]: SplitDate) => whole + fraction;
  const zero_from = (["zero_bjd_tdb", "zero_hjd_utc", "zero_hjd_tt"] as const)
    .find((key) => orbit[key] !== undefined) ?? "the first exposure";
  const given = zero_from === "the first exposure" ? sum(ephemeris.zero) : orbit[zero_from]!;
  const best = Math.round(decorrelatedOrbit(ephemeris));
  return {
    check: {
      period_d: ephemeris.period_d,
      period_error_d: orbit.period_error_d ?? null,
      period_derivative: ephemeris.period_derivative,
      zero_bjd_tdb: sum(ephemeris.zero),
      zero_error_d: orbit.zero_error_d ?? null,
      zero_from,
      zero_moved_s: 86400 *
        (ephemeris.zero[0] - Math.floor(given) + ephemeris.zero[1] - (given - Math.floor(given))),
      zero_marks: ephemeris.zero_marks,
      orbits_since_zero: orbits,
      phase_error: missing.length === 0 ? phaseError(ephemeris, epoch) : null,
      decorrelated_bjd_tdb: ephemeris.covariance_d2 === 0 ? null : sum(instantOf(ephemeris, best)),
    },
    warnings: missing.length === 0 ? [] : [{
      code: "phase-error-unknown",
      text: `${missing.join(" and ")} ${
        missing.length === 1 ? "is" : "are"
      } not given: how well the phase is known at the data, ${Math.abs(orbits).toFixed(0)} orbits ${
        orbits < 0 ? "before" : "after"
      } the zero, cannot be told`,
    }],
  };
}
