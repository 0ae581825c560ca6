import type { Ephemeris } from "../binary/mod.ts";
import { InputError, type Warning } from "../errors.ts";
import type { RandomStream } from "../numerics/mod.ts";
import { eccentricityReport, jointReport } from "./joint_report.ts";
import { type MassPlanes, massPlanes } from "./mass_planes.ts";
import { massReport } from "./mass_report.ts";
import type { InclinationKnowledge, MassInput, MeasuredValue } from "./mass_input.ts";
import { type MassSolution, solveMasses } from "./mass_solution.ts";
import type { AccretorLine, FittedCurve } from "./measure_accretor.ts";
import type { DonorLine } from "./measure_donor.ts";
import { zeroShift } from "./orbit_ephemeris.ts";
import type { OrbitLine } from "./orbit_line.ts";
import type { OrbitReport, VelocityRow } from "./orbit_report.ts";
import { type PeriodSearch, requirePeriodRange } from "./period_search.ts";
import { requirePhaseSpread } from "./phase_spread.ts";
import { type Settled, settleEphemeris } from "./settle_ephemeris.ts";
import { curveReport, velocityRows } from "./star_reports.ts";
import { summariseStars } from "./star_summary.ts";

/** Options of {@linkcode measureOrbit}. */
export interface MeasureOrbitOptions {
  /** The ephemeris on which the trails are folded; provisional when a period range is given. */
  readonly ephemeris: Ephemeris;
  /** Source of chance: masses, and the false alarm of a period. */
  readonly random: RandomStream;
  /** Periods to search, d; then the ephemeris is only how the trails tell time. @default {undefined} */
  readonly period_range_d?: readonly [shortest: number, longest: number];
  /** What is known of the inclination. @default {null} */
  readonly inclination?: InclinationKnowledge | null;
  /** Angle up to which the disc shadows the donor, degrees; null when unknown. @default {null} */
  readonly disc_shadow_deg?: number | null;
  /** Superhump period excess. @default {null} */
  readonly superhump_excess?: MeasuredValue | null;
  /** Draws for the masses. @default {20000} */
  readonly draws?: number;
}

/** All that {@linkcode measureOrbit} finds. */
export interface OrbitMeasurement {
  /** The content of `orbit.json`. */
  readonly report: OrbitReport;
  /** The rows of `velocities.ecsv`. */
  readonly velocities: readonly VelocityRow[];
  /** The ephemeris reported. */
  readonly ephemeris: Ephemeris;
  /** Diagnostic diagrams, plateaus and light centres, one per line of the accretor. */
  readonly accretor_lines: readonly AccretorLine[];
  /** Velocities, sums and subtractions, one per line of the donor. */
  readonly donor_lines: readonly DonorLine[];
  /** All curves with their orbits. */
  readonly curves: readonly FittedCurve[];
  /** The period search; null when the period was given. */
  readonly period_search: PeriodSearch | null;
  /** Masses; null when no K was measured. */
  readonly masses: MassSolution | null;
  /** M1–M2 and q–i planes; null when no K was measured. */
  readonly planes: MassPlanes | null;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

const action = "measure orbit";

function requireLines(lines: readonly OrbitLine[], phased: boolean): void {
  if (lines.length === 0) {
    throw new InputError({ action, rule: "there must be a line", value: 0, key: "lines" });
  }
  for (const { trail } of lines) {
    const { count, phase } = trail.sampling;
    if (count < 5) {
      throw new InputError({
        action,
        rule: `it takes at least 5 exposures (${trail.line.name})`,
        value: count,
        remedy: "add exposures",
      });
    }
    const unknown = trail.sampling.profile_sigma_kms.find((sigma) => !(sigma > 0));
    if (unknown !== undefined) {
      throw new InputError({
        action,
        rule: `the resolution of every exposure must be known (${trail.line.name})`,
        value: unknown,
        unit: "km/s",
        key: "resolution_angstrom",
      });
    }
    if (phased) requirePhaseSpread(phase, `${action} of ${trail.line.name}`);
  }
}

/**
 * Measures an orbit: velocity curves of every line, period (searched, refined or held), zero of
 * phase, K1, K2, γ, and the masses that follow, each with its error or with the reason why it was
 * not measured.
 *
 * The donor's lines are measured first. Where they give a better phase than the ephemeris, all is
 * folded on theirs, and the accretor's plateau is judged by it. Crossing phases refer to the
 * ephemeris in the report.
 *
 * @param lines The lines, with the star that each follows.
 * @param options Ephemeris, chance, and what else is known.
 * @returns Report, tables and data for plates.
 * @throws {InputError} When there is no line, a line has fewer than 5 exposures, the period range is
 * empty, a template does not overlap, or the inclination is impossible.
 *
 * @example
 * ```ts
 * import type { Ephemeris } from "@millrace/millrace/binary";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import type { Trail } from "@millrace/millrace/trail";
 * import { measureOrbit } from "@millrace/millrace/orbit";
 *
 * function massRatio(disc: Trail, sodium: Trail, ephemeris: Ephemeris): number | null {
 *   const lines = [{ trail: disc }, { trail: sodium, traces: "donor" }] as const;
 *   return measureOrbit(lines, { ephemeris, random: randomStream(1) }).report.mass_ratio;
 * }
 * ```
 */
export function measureOrbit(
  lines: readonly OrbitLine[],
  options: MeasureOrbitOptions,
): OrbitMeasurement {
  requireLines(lines, options.period_range_d === undefined);
  const { period_range_d, inclination = null, superhump_excess = null, random } = options;
  if (period_range_d) requirePeriodRange(period_range_d);
  const settled = settleEphemeris(lines, options);
  const { ephemeris, zero_from, period_from, period_search, accretors, donors } = settled;
  const stars = summariseStars(settled, options);
  const { accretor, donor, k_accretor_kms, k_donor_kms, v_sin_i_kms } = stars;

  const input: MassInput | null = k_accretor_kms || k_donor_kms
    ? {
      period_d: { value: ephemeris.period_d, error: ephemeris.period_error_d },
      k_accretor_kms,
      k_donor_kms,
      v_sin_i_kms,
      superhump_excess,
      inclination,
    }
    : null;
  const masses = input && solveMasses(input, { random, draws: options.draws ?? 20000 });
  const curves = [...accretors, ...donors].flatMap(({ found }) => found.curves);
  const sources = new Map(lines.map(({ trail }) => [trail.line.name, trail.sources]));
  const report: OrbitReport = {
    period_d: ephemeris.period_d,
    period_error_d: ephemeris.period_error_d || null,
    period_from,
    zero_bjd_tdb: ephemeris.zero[0] + ephemeris.zero[1],
    zero_error_d: ephemeris.zero_error_d || null,
    zero_period_covariance_d2: ephemeris.covariance_d2,
    zero_marks: ephemeris.zero_marks,
    zero_from,
    zero_shift_cycles: period_search ? null : zeroShift(ephemeris, options.ephemeris),
    accretor,
    donor,
    joint: jointReport(curves),
    eccentricity: eccentricityReport(curves),
    curves: curves.map(curveReport),
    mass_ratio: masses?.mass_ratio?.median ?? null,
    mass_ratio_error: masses?.mass_ratio?.deviation ?? null,
    masses: massReport(masses, ephemeris.period_d),
  };
  return {
    report,
    velocities: velocityRows(curves, sources, ephemeris),
    ephemeris,
    accretor_lines: accretors.map(({ found }) => found),
    donor_lines: donors.map(({ found }) => found),
    curves,
    period_search,
    masses,
    planes: masses && massPlanes(masses, input!),
    warnings: [...ephemerisWarnings(settled), ...stars.warnings, ...massWarnings(masses)],
  };
}

/** What is doubtful about period and zero. */
function ephemerisWarnings({ ephemeris, period_from, period_search: search }: Settled): Warning[] {
  const found: Warning[] = [];
  if (search?.ambiguous) {
    const others = search.candidates.slice(1).filter((one) => one.delta_chi_square < 9);
    const named = others.slice(0, 4).map((one) => `${one.period_d.toFixed(7)} d`).join(", ");
    found.push({
      code: "period-ambiguous",
      text: `${others.length} other periods fit nearly as well (chi-square within 9): ${named}`,
    });
  }
  const chance = search &&
    Math.max(search.false_alarm.searched, search.false_alarm_resampled ?? 0);
  if (chance !== null && chance > 0.05) {
    found.push({
      code: "period-by-chance",
      text: `noise alone gives such a peak with a chance of ${chance.toPrecision(2)}`,
    });
  }
  if (period_from.startsWith("held")) {
    found.push({ code: "period-held", text: `period ${period_from}` });
  }
  if (ephemeris.zero_marks === "emission-crossing") {
    found.push({
      code: "zero-not-conjunction",
      text: "the zero of phase is not the donor's conjunction, so K1 cannot be judged by its phase",
    });
  }
  return found;
}

/** What is doubtful about the mass ratio. */
function massWarnings(masses: MassSolution | null): Warning[] {
  if (masses?.agreement == null || masses.agreement >= 0.01) return [];
  return [{
    code: "mass-ratio-disagree",
    text: `the mass ratios from ${masses.mass_ratio_from.join(" and ")} disagree ` +
      `(chance ${masses.agreement.toPrecision(2)})`,
  }];
}
