import type { FittedCurve, Plane, PlateSubject, Scan } from "../../figures/mod.ts";
import { wrapPhase } from "../../numerics/mod.ts";
import type { OrbitMeasurement } from "../../orbit/mod.ts";

/** What plates show of an orbit; a part that was not measured is left out. */
export function orbitSubject(
  measurement: OrbitMeasurement,
  options: { line: string },
): Pick<
  PlateSubject,
  | "velocities"
  | "diagnostic"
  | "light_centre"
  | "periodogram"
  | "mass_plane"
  | "inclination_plane"
> {
  const velocities = fittedCurves(measurement);
  const own = measurement.accretor_lines.find(({ diagram }) => diagram.line === options.line) ??
    measurement.accretor_lines[0];
  return {
    ...(velocities.length === 0 ? {} : { velocities }),
    ...(own === undefined ? {} : diagrams(own)),
    ...(measurement.period_search === null
      ? {}
      : { periodogram: periodogram(measurement.period_search) }),
    ...planes(measurement),
  };
}

function fittedCurves(measurement: OrbitMeasurement): FittedCurve[] {
  const { curves } = measurement;
  const shown = curves.filter(({ measured, fit }) => measured && fit !== null);
  return (shown.length > 0 ? shown : curves.filter(({ fit }) => fit !== null).slice(0, 1))
    .map(({ curve, fit }) => ({
      name: `${curve.line}, ${curve.star}`,
      phase: Array.from(curve.orbits, wrapPhase),
      value: curve.velocity_kms,
      error: curve.error_kms,
      systemic_kms: fit!.systemic_kms,
      k_kms: fit!.k_kms,
      crossing_phase: fit!.crossing_phase,
    }));
}

function diagrams(
  own: OrbitMeasurement["accretor_lines"][number],
): Pick<PlateSubject, "diagnostic" | "light_centre"> {
  const rows = own.diagram.rows.flatMap(({ half_separation_kms, fit }) =>
    fit === null ? [] : [{ half_separation_kms, fit }]
  );
  if (rows.length < 2) return {};
  const chosen = own.plateau.half_separations_kms;
  const { light_centre: light } = own;
  return {
    diagnostic: {
      separation_kms: rows.map(({ half_separation_kms }) => 2 * half_separation_kms),
      k_kms: rows.map(({ fit }) => fit.k_kms),
      k_error_kms: rows.map(({ fit }) => fit.k_error_kms),
      systemic_kms: rows.map(({ fit }) => fit.systemic_kms),
      systemic_error_kms: rows.map(({ fit }) => fit.systemic_error_kms),
      crossing_phase: rows.map(({ fit }) => fit.crossing_phase),
      crossing_error: rows.map(({ fit }) => fit.crossing_phase_error),
      chosen_kms: own.plateau.accepted && chosen !== null ? chosen[0] + chosen[1] : null,
    },
    light_centre: {
      vx_kms: light.vx_kms,
      vx_error_kms: light.vx_error_kms,
      vy_kms: light.vy_kms,
      vy_error_kms: light.vy_error_kms,
    },
  };
}

function periodogram(search: NonNullable<OrbitMeasurement["period_search"]>): Scan {
  const [best] = search.candidates;
  return {
    x: search.frequency_per_d,
    y: search.power,
    best: best?.frequency_per_d ?? null,
  };
}

function planes(
  measurement: OrbitMeasurement,
): Pick<PlateSubject, "mass_plane" | "inclination_plane"> {
  const { planes: made, report } = measurement;
  if (made === null) return {};
  const curves = (list: typeof made.masses) =>
    list.map(({ label, x, y }) => ({ name: label, x: Array.from(x), y: Array.from(y) }));
  const { masses, mass_ratio, mass_ratio_error } = report;
  const half = (low: number | null, high: number | null) => ((low ?? 0) + (high ?? 0)) / 2;
  const masses_plane: Plane = {
    curves: curves(made.masses),
    ...(masses.accretor_msun === null || masses.donor_msun === null ? {} : {
      adopted: {
        x: masses.accretor_msun,
        y: masses.donor_msun,
        x_error: half(masses.accretor_error_low_msun, masses.accretor_error_high_msun),
        y_error: half(masses.donor_error_low_msun, masses.donor_error_high_msun),
      },
    }),
  };
  return {
    mass_plane: masses_plane,
    inclination_plane: {
      curves: curves(made.inclinations),
      ...(mass_ratio === null || masses.inclination_deg === null ? {} : {
        adopted: {
          x: mass_ratio,
          y: masses.inclination_deg,
          x_error: mass_ratio_error ?? 0,
          y_error: half(masses.inclination_error_low_deg, masses.inclination_error_high_deg),
        },
      }),
    },
  };
}
