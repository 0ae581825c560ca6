import type { Ephemeris } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { RandomStream } from "../numerics/mod.ts";
import { donorOptions } from "./donor_options.ts";
import { measureAccretor } from "./measure_accretor.ts";
import { measureDonor } from "./measure_donor.ts";
import { ephemerisOf } from "./orbit_ephemeris.ts";
import { fitOrbit } from "./orbit_fit.ts";
import type { OrbitLine } from "./orbit_line.ts";
import { type PeriodSearch, searchPeriod } from "./period_search.ts";
import { measuredOnly, type TracedStar, type VelocityCurve } from "./velocity_curve.ts";

/** The curve in which a period is sought: the donor's when most of it was measured, or the wings'. */
function curveForPeriod(lines: readonly OrbitLine[]): VelocityCurve {
  let best: { curve: VelocityCurve; merit: number } | undefined;
  for (const line of lines) {
    const candidates = line.traces === "donor"
      ? [measureDonor(line.trail, { ...donorOptions(line), phased: false }).velocities.curve]
      : measureAccretor(line.trail, { zero_is_conjunction: false }).diagram.rows
        .filter((row) => row.measured >= 0.8)
        .map((row) => row.curve);
    for (const curve of candidates) {
      const used = measuredOnly(curve);
      const n = used.orbits.length;
      if (n < 8) continue;
      const mean = used.velocity_kms.reduce((sum, v) => sum + v, 0) / n;
      // Scatter over errors: how much there is to be explained by a period.
      const merit = used.velocity_kms.reduce(
        (sum, v, k) => sum + ((v - mean) / used.error_kms[k]!) ** 2,
        0,
      );
      if (!best || merit > best.merit) best = { curve: used, merit };
    }
  }
  if (best) return best.curve;
  throw new InputError({
    action: "search period",
    rule: "at least 8 velocities of one line must be measured",
    value: 0,
    remedy: "give the period, or a line with more signal",
  });
}

/** Searches the period in the curve that has most to tell, and fits an ephemeris there. */
export function findPeriod(lines: readonly OrbitLine[], options: {
  /** The ephemeris that the trails tell time by. */
  readonly ephemeris: Ephemeris;
  /** Source of chance. */
  readonly random: RandomStream;
  /** Periods to search, d. */
  readonly period_range_d: readonly [number, number];
}): { search: PeriodSearch; found: Ephemeris; star: TracedStar } {
  const { ephemeris, random } = options;
  const curve = curveForPeriod(lines);
  const search = searchPeriod({
    time: curve.orbits.map((x) => x * ephemeris.period_d),
    value: curve.velocity_kms,
    error: curve.error_kms,
  }, { period_range_d: options.period_range_d, random });
  const ratio = search.candidates[0]!.period_d / ephemeris.period_d;
  const rescaled = {
    ...curve,
    orbits: curve.orbits.map((x) => x / ratio),
    exposure_orbits: curve.exposure_orbits.map((w) => w / ratio),
  };
  const scaled = {
    ...ephemeris,
    period_d: search.candidates[0]!.period_d,
    period_error_d: 0,
    zero_error_d: 0,
    covariance_d2: 0,
    period_derivative: 0,
  };
  const marks = curve.star === "donor" ? "donor-conjunction" : "emission-crossing";
  const found = ephemerisOf(fitOrbit([rescaled]), scaled, marks);
  return { search, found, star: curve.star };
}
