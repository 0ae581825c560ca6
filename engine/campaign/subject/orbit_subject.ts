import type { FittedCurve, Plane, PlaneCurve, PlateSubject, Scan } from "../../figures/mod.ts";
import { wrapPhase } from "../../numerics/mod.ts";
import { measuredOnly, type OrbitMeasurement, searchPeriod } from "../../orbit/mod.ts";

/**
 * What plates show of an orbit; a part that was not measured is left out.
 *
 * @param measurement The orbit.
 * @param options Of what.
 * @param options.line Name of the line whose wings are shown.
 * @param options.periodogram Whether a periodogram about a given period is wanted. @default false
 * @returns Fields of a plate's subject.
 */
export function orbitSubject(
  measurement: OrbitMeasurement,
  options: { line: string; periodogram?: boolean },
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
    ...periodogramSubject(measurement, { wanted: options.periodogram ?? false }),
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
      systemic_error_kms: fit!.systemic_error_kms,
      k_kms: fit!.k_kms,
      k_error_kms: fit!.k_error_kms,
      crossing_phase: fit!.crossing_phase,
      crossing_error: fit!.crossing_phase_error,
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

/** The search that was made, or where the period was given, one from a third to three times of it. */
function periodogramSubject(
  measurement: OrbitMeasurement,
  options: { wanted: boolean },
): Pick<PlateSubject, "periodogram"> {
  if (measurement.period_search !== null) return { periodogram: scanOf(measurement.period_search) };
  const { period_d } = measurement.ephemeris;
  const best = measurement.curves.find(({ measured }) => measured) ?? measurement.curves[0];
  if (!options.wanted || best === undefined) return {};
  const { orbits, velocity_kms, error_kms } = measuredOnly(best.curve);
  const search = searchPeriod(
    { time: orbits.map((x) => x * period_d), value: velocity_kms, error: error_kms },
    { period_range_d: [period_d / 3, 3 * period_d], oversampling: 40 },
  );
  return { periodogram: { ...scanOf(search), reference: 1 / period_d } };
}

function scanOf(search: NonNullable<OrbitMeasurement["period_search"]>): Scan {
  return {
    x: search.frequency_per_d,
    y: search.power,
    best: search.candidates[0]?.frequency_per_d ?? null,
  };
}

function planes(
  measurement: OrbitMeasurement,
): Pick<PlateSubject, "mass_plane" | "inclination_plane"> {
  const { planes: made, report } = measurement;
  if (made === null) return {};
  const { draws } = made;
  const { masses, mass_ratio, mass_ratio_error } = report;
  const half = (low: number | null, high: number | null) => ((low ?? 0) + (high ?? 0)) / 2;
  const masses_plane: Plane = {
    curves: planeCurves(made.masses),
    ...(draws === null ? {} : { samples: { x: draws.accretor_msun, y: draws.donor_msun } }),
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
      curves: planeCurves(made.inclinations),
      ...(draws === null ? {} : { samples: { x: draws.mass_ratio, y: draws.inclination_deg } }),
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

/** Curves with names in print; q with its error as one band. */
function planeCurves(
  list: NonNullable<OrbitMeasurement["planes"]>["masses"],
): PlaneCurve[] {
  const labelled = (label: string) => list.find((curve) => curve.label === label);
  const [low, high] = [labelled("q − σ"), labelled("q + σ")];
  return list.filter((curve) => curve !== low && curve !== high).map(({ label, x, y }) => ({
    name: label.replace(/^[iq]/, "*$&*").replace(/^M1 /, "*M*_{1} = "),
    x: Array.from(x),
    y: Array.from(y),
    ...(label === "q" && low !== undefined && high !== undefined
      ? { low: low.y, high: high.y }
      : {}),
  }));
}
