import { type Ephemeris, instantOf, moveZero, phaseError } from "../binary/mod.ts";
import type { RandomStream } from "../numerics/mod.ts";
import { donorOptions } from "./donor_options.ts";
import { findPeriod } from "./line_period.ts";
import { type AccretorLine, measureAccretor } from "./measure_accretor.ts";
import { type DonorLine, measureDonor } from "./measure_donor.ts";
import type { InclinationKnowledge } from "./mass_input.ts";
import { ephemerisOf, fittedIsBetter } from "./orbit_ephemeris.ts";
import { fitOrbit } from "./orbit_fit.ts";
import type { OrbitLine } from "./orbit_line.ts";
import type { OrbitReport } from "./orbit_report.ts";
import type { PeriodSearch } from "./period_search.ts";
import { rephase } from "./rephase.ts";
import { smallest } from "./smallest.ts";
import type { VelocityCurve } from "./velocity_curve.ts";

/** What the ephemeris is settled from. */
export interface SettleOptions {
  /** The ephemeris on which the trails are folded. */
  readonly ephemeris: Ephemeris;
  /** Source of chance. */
  readonly random: RandomStream;
  /** Periods to search, d. */
  readonly period_range_d?: readonly [number, number];
  /** What is known of the inclination. */
  readonly inclination?: InclinationKnowledge | null;
}

/** A line with what was found in it. */
export interface MeasuredLine<Found> extends OrbitLine {
  /** What was found. */
  readonly found: Found;
}

/** Lines measured on one ephemeris. */
export interface Settled {
  /** The ephemeris. */
  readonly ephemeris: Ephemeris;
  /** Where its zero comes from. */
  readonly zero_from: OrbitReport["zero_from"];
  /** How its period was had. */
  readonly period_from: string;
  /** The search; null when the period was given. */
  readonly period_search: PeriodSearch | null;
  /** The accretor's lines. */
  readonly accretors: readonly MeasuredLine<AccretorLine>[];
  /** The donor's lines. */
  readonly donors: readonly MeasuredLine<DonorLine>[];
}

function fold(lines: readonly OrbitLine[], from: Ephemeris, to: Ephemeris): readonly OrbitLine[] {
  if (from === to) return lines;
  return lines.map((line) => ({ ...line, trail: rephase(line.trail, { from, to }) }));
}

function measureDonors(lines: readonly OrbitLine[]): readonly MeasuredLine<DonorLine>[] {
  return lines.filter((line) => line.traces === "donor")
    .map((line) => ({ ...line, found: measureDonor(line.trail, donorOptions(line)) }));
}

function measureAccretors(
  lines: readonly OrbitLine[],
  ephemeris: Ephemeris,
  inclination: InclinationKnowledge | null,
): readonly MeasuredLine<AccretorLine>[] {
  return lines.filter((line) => line.traces !== "donor").map((line) => {
    const { cycle, count } = line.trail.sampling;
    const middle = instantOf(ephemeris, cycle[count >> 1]! + 0.5);
    return {
      ...line,
      found: measureAccretor(line.trail, {
        zero_is_conjunction: ephemeris.zero_marks !== "emission-crossing",
        phase_error: phaseError(ephemeris, middle),
        ...(inclination && "deg" in inclination ? { inclination_deg: inclination.deg.value } : {}),
      }),
    };
  });
}

/**
 * Measures all lines on the best ephemeris to be had: found by a search when asked, then refined by
 * the donor's velocities. Without a donor the accretor's plateau may refine the period; the zero
 * then stays the given one, moved by whole orbits to the middle of the data.
 *
 * @param lines The lines, folded on the ephemeris of the options.
 * @param options Ephemeris, chance, period range.
 * @returns Ephemeris and measured lines.
 */
export function settleEphemeris(lines: readonly OrbitLine[], options: SettleOptions): Settled {
  const { ephemeris: given, random, period_range_d, inclination = null } = options;
  let ephemeris = given;
  let zero_from: Settled["zero_from"] = "target";
  let period_from = "given";
  let period_search: PeriodSearch | null = null;
  if (period_range_d) {
    const { search, found, star } = findPeriod(lines, { ephemeris, random, period_range_d });
    [period_search, ephemeris, zero_from, period_from] = [search, found, star, "searched"];
  }
  // A period found in the same data is no prior.
  const refine = (curve: VelocityCurve) =>
    fitOrbit([curve], {
      period_prior: period_search ? 0 : ephemeris.period_error_d / ephemeris.period_d,
    });
  let folded = fold(lines, given, ephemeris);
  let donors = measureDonors(folded);
  const donor = smallest(
    donors.filter(({ found }) => found.curves[0]?.measured),
    ({ found }) => found.orbit?.k_error_kms ?? null,
  );
  if (donor) {
    const fit = refine(donor.found.velocities.curve);
    const fitted = ephemerisOf(fit, ephemeris, "donor-conjunction");
    if (period_search || fittedIsBetter(ephemeris, fitted, fit.conjunction_orbits)) {
      folded = fold(folded, ephemeris, fitted);
      [ephemeris, zero_from, period_from] = [fitted, "donor", fit.period];
      donors = measureDonors(folded);
    } else {
      period_from = fit.period === "fitted"
        ? "given: better than what these data give"
        : fit.period;
    }
  }
  let accretors = measureAccretors(folded, ephemeris, inclination);
  const accretor = smallest(
    accretors,
    ({ found }) => found.plateau.accepted ? found.plateau.fit!.k_error_kms : null,
  );
  if (!donor && accretor && !period_search) {
    const fit = refine(accretor.found.plateau.curve!);
    const error = fit.period_ratio_error * ephemeris.period_d;
    period_from = fit.period;
    if (
      fit.period === "fitted" &&
      !(error >= ephemeris.period_error_d && ephemeris.period_error_d > 0)
    ) {
      const middle = moveZero(ephemeris, Math.round(fit.conjunction_orbits));
      const fitted = {
        ...middle,
        period_d: middle.period_d * fit.period_ratio,
        period_error_d: error,
        covariance_d2: 0,
      };
      folded = fold(folded, ephemeris, fitted);
      ephemeris = fitted;
      accretors = measureAccretors(folded, ephemeris, inclination);
    } else if (fit.period === "fitted") {
      period_from = "given: better than what these data give";
    }
  }
  return { ephemeris, zero_from, period_from, period_search, accretors, donors };
}
