import { type Ephemeris, instantOf } from "../binary/mod.ts";
import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import type { FittedCurve } from "./measure_accretor.ts";
import type { DonorOrbit } from "./measure_donor.ts";
import type { CurveReport, StarReport, VelocityRow } from "./orbit_report.ts";
import { measuredOnly } from "./velocity_curve.ts";

/** A curve as `orbit.json` holds it. */
export function curveReport({ curve, fit, measured, reasons }: FittedCurve): CurveReport {
  return {
    line: curve.line,
    method: curve.method,
    star: curve.star,
    k_kms: fit?.k_kms ?? null,
    k_error_kms: fit?.k_error_kms ?? null,
    systemic_kms: fit?.systemic_kms ?? null,
    systemic_error_kms: fit?.systemic_error_kms ?? null,
    crossing_phase: fit?.crossing_phase ?? null,
    crossing_phase_error: fit?.crossing_phase_error ?? null,
    chi_square: fit?.chi_square ?? null,
    degrees_of_freedom: fit?.degrees_of_freedom ?? null,
    jitter_kms: fit?.jitter_kms ?? null,
    sample_count: measuredOnly(curve).orbits.length,
    measured,
    reasons,
  };
}

/** The numbers of a star that was not measured. */
export const UNMEASURED = {
  k_kms: null,
  k_error_kms: null,
  k_range_kms: null,
  systemic_kms: null,
  systemic_error_kms: null,
  crossing_phase: null,
  crossing_phase_error: null,
} as const;

/** V/c does not add but multiplies: a K seen through γ is (1 + γ/c) times the star's. */
function unstretched(k: number, systemic_kms: number): number {
  return k / (1 + systemic_kms / SPEED_OF_LIGHT_KMS.value);
}

/** A star's orbit as `orbit.json` holds it. */
export function starReport(orbit: DonorOrbit, line: string): StarReport {
  const { systemic_kms, systemic_error_kms, crossing_phase, crossing_phase_error, method } = orbit;
  return {
    k_kms: unstretched(orbit.k_kms, systemic_kms),
    k_error_kms: unstretched(orbit.k_error_kms, systemic_kms),
    k_range_kms: null,
    systemic_kms,
    systemic_error_kms,
    crossing_phase,
    crossing_phase_error,
    line,
    method,
  };
}

/** The rows of `velocities.ecsv`, on one ephemeris. */
export function velocityRows(
  curves: readonly FittedCurve[],
  sources: ReadonlyMap<string, readonly string[]>,
  ephemeris: Ephemeris,
): VelocityRow[] {
  return curves.flatMap(({ curve }) =>
    Array.from(curve.orbits, (orbits, i): VelocityRow => {
      const [bjd_day, bjd_fraction] = instantOf(ephemeris, orbits);
      const known = curve.error_kms[i]! < Infinity;
      return {
        line: curve.line,
        method: curve.method,
        star: curve.star,
        source: sources.get(curve.line)?.[i] ?? "",
        bjd_day,
        bjd_fraction,
        cycle: Math.floor(orbits),
        phase: orbits - Math.floor(orbits),
        exposure_cycles: curve.exposure_orbits[i]!,
        velocity_kms: known ? curve.velocity_kms[i]! : null,
        error_kms: known ? curve.error_kms[i]! : null,
      };
    })
  );
}
