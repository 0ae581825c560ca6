import { fitEccentric } from "./eccentric_fit.ts";
import type { FittedCurve } from "./measure_accretor.ts";
import { fitOrbit } from "./orbit_fit.ts";
import type { EccentricityReport, JointReport } from "./orbit_report.ts";
import { smallest } from "./smallest.ts";
import { measuredOnly, type TracedStar } from "./velocity_curve.ts";

/** The measured curve of a star with the smallest error of K. */
function bestCurve(curves: readonly FittedCurve[], star?: TracedStar): FittedCurve | undefined {
  const ours = curves.filter(({ curve, measured }) =>
    measured && (star === undefined || curve.star === star)
  );
  return smallest(ours, ({ fit }) => fit && fit.k_error_kms / fit.k_kms);
}

/**
 * Both stars' best curves fitted together, period held.
 *
 * @param curves All curves.
 * @returns The fit; null unless both stars have a measured curve.
 */
export function jointReport(curves: readonly FittedCurve[]): JointReport | null {
  const accretor = bestCurve(curves, "accretor"), donor = bestCurve(curves, "donor");
  if (!accretor || !donor) return null;
  const fit = fitOrbit([accretor.curve, donor.curve], { period: "held" });
  const [one, two] = fit.stars as [typeof fit.stars[number], typeof fit.stars[number]];
  const phase = fit.conjunction_orbits - Math.round(fit.conjunction_orbits);
  return {
    k_accretor_kms: one.k_kms,
    k_accretor_error_kms: one.k_error_kms,
    k_donor_kms: two.k_kms,
    k_donor_error_kms: two.k_error_kms,
    accretor_systemic_kms: one.systemic_kms,
    donor_systemic_kms: two.systemic_kms,
    k_correlation: fit.covariance.get(one.k_index, two.k_index) /
      (one.k_error_kms * two.k_error_kms),
    conjunction_phase: phase,
    conjunction_phase_error: fit.conjunction_error_orbits,
    chi_square: fit.chi_square,
    degrees_of_freedom: fit.degrees_of_freedom,
  };
}

/**
 * Whether the best curve asks for an eccentric orbit, its errors grown by the jitter of the circular
 * one.
 *
 * @param curves All curves.
 * @returns The test; null without a measured curve of at least 7 velocities.
 */
export function eccentricityReport(curves: readonly FittedCurve[]): EccentricityReport | null {
  const best = bestCurve(curves);
  if (!best || measuredOnly(best.curve).orbits.length < 7) return null;
  const { curve, fit } = best;
  const found = fitEccentric({
    ...curve,
    error_kms: curve.error_kms.map((e) => Math.hypot(e, fit!.jitter_kms)),
  });
  return {
    line: curve.line,
    eccentricity: found.eccentricity,
    eccentricity_error: found.eccentricity_error,
    periastron_deg: found.periastron_deg,
    probability_if_circular: found.probability_if_circular,
    significant: found.significant,
  };
}
