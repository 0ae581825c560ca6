import { DAY_S } from "../constants.ts";
import { InputError, type Warning } from "../errors.ts";
import { addDays, type SplitDate } from "./bjd.ts";
import { type Direction, unitVector } from "./direction.ts";
import { leapSecondWarnings } from "./leap_seconds.ts";
import { observerState } from "./observer_state.ts";
import type { Site } from "./site.ts";
import { type TimeScale, toTt, ttToTdb, ttToUtc } from "./time_scales.ts";

/** Place for which a date holds: light from the target passes it then. */
export type TimePlace = "observatory" | "heliocentric" | "barycentric";

/** What a recorded time marks of its exposure. */
export type TimeMark = "start" | "mid" | "end";

/** When an exposure was taken, as it is recorded. */
export interface ExposureTime {
  /** Recorded date. */
  readonly date: SplitDate;
  /**
   * Exposure time, s.
   *
   * @default 0
   */
  readonly exposure_s?: number;
  /**
   * What the date marks.
   *
   * @default "start"
   */
  readonly marks?: TimeMark;
  /**
   * Time scale of the date.
   *
   * @default "utc"
   */
  readonly scale?: TimeScale;
  /**
   * Place for which the date holds.
   *
   * @default "observatory"
   */
  readonly place?: TimePlace;
}

/** From where to where one looks. */
export interface SightLine {
  /** The target. */
  readonly target: Direction;
  /**
   * The observatory; null for the centre of the Earth, up to 21 ms and 0.47 km/s away.
   *
   * @default null
   */
  readonly site?: Site | null;
}

/** The middle of an exposure at the barycentre, and what brings wavelengths there. */
export interface BarycentricMoment {
  /** Middle of the exposure, BJD(TDB). */
  readonly bjd: SplitDate;
  /** Middle of the exposure at the observatory, UTC. */
  readonly utc: SplitDate;
  /** Light time from the observatory's to the barycentre's plane of arrival, s; it is in `bjd`. */
  readonly light_time_s: number;
  /**
   * Barycentric over observed wavelength, 1 + v/c: the Doppler factor, time dilation and the potentials of
   * Sun and Earth (Wright & Eastman 2014, PASP 126, 838, eq. 28).
   */
  readonly observer_factor: number;
  /** Heliocentric over observed wavelength, 1 + v/c, first order, as pipelines apply it. */
  readonly heliocentric_factor: number;
  /** What to know about the result. */
  readonly warnings: readonly Warning[];
}

type Vector = readonly [x: number, y: number, z: number];

const dot = (a: Vector, b: Vector) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

const HALVES: Record<TimeMark, number> = { start: 0.5, mid: 0, end: -0.5 };

// TT at the observatory when light that passes `place` at `date` passes it.
function observatoryTt(
  date: SplitDate,
  { scale, place, n, site }: { scale: TimeScale; place: TimePlace; n: Vector; site: Site | null },
): SplitDate {
  const here = (tt: SplitDate) => {
    const state = observerState(tt, site);
    return dot(place === "heliocentric" ? state.heliocentric_s : state.barycentric_s, n);
  };
  if (place === "observatory") return toTt(date, scale);
  // The date less the light time is a date at the observatory in the same scale. Each round gains
  // four digits: the Earth moves at 1e-4 of the speed of light.
  let tt = toTt(date, scale);
  for (let i = 0; i < 4; i++) tt = toTt(addDays(date, -here(tt) / DAY_S.value), scale);
  return tt;
}

/**
 * The middle of an exposure in BJD(TDB) (Eastman, Siverd & Gaudi 2010, PASP 122, 935; no Shapiro delay, which
 * is below 0.1 ms away from the Sun) and the factor for its wavelengths. Half the exposure is added in
 * elapsed seconds, so that it is right across a leap second. Against a full ephemeris times are within
 * 10 ms and velocities within 2 m/s.
 *
 * @param time When the exposure was taken.
 * @param sight Target and observatory.
 * @returns The middle of the exposure at the barycentre.
 * @throws {InputError} Before 1972 and from 2100 on, or when a coordinate or the exposure is out of range.
 *
 * @example
 * ```ts
 * import { midExposureBjd, parseIsoDate } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { bjd, observer_factor } = midExposureBjd(
 *   { date: parseIsoDate("2003-12-24T04:10:00"), exposure_s: 300 },
 *   {
 *     target: { ra_deg: 95.7, dec_deg: -0.35 },
 *     site: { latitude_deg: -24.6, longitude_east_deg: -70.4, height_m: 2600 },
 *   },
 * );
 * assertAlmostEquals(bjd[1], 0.681261, 1e-6);
 * assertAlmostEquals((observer_factor - 1) * 299792.458, 2.110, 0.002);
 * ```
 */
export function midExposureBjd(time: ExposureTime, sight: SightLine): BarycentricMoment {
  const { date, exposure_s = 0, marks = "start", scale = "utc", place = "observatory" } = time;
  const { target, site = null } = sight;
  if (!(exposure_s >= 0 && exposure_s <= 1e6)) {
    throw new InputError({
      action: "find the middle of an exposure",
      rule: "exposure time must be from 0 to 1000000 s",
      value: exposure_s,
      unit: "s",
    });
  }
  if (!Number.isFinite(date[0] + date[1])) {
    throw new InputError({
      action: "find the middle of an exposure",
      rule: "its date must be finite",
      value: date,
    });
  }
  const n = unitVector(target);
  const marked = observatoryTt(date, { scale, place, n, site });
  const tt = addDays(marked, HALVES[marks] * exposure_s / DAY_S.value);
  const utc = ttToUtc(tt);
  const state = observerState(tt, site);
  const light_time_s = dot(state.barycentric_s, n);
  const beta = state.barycentric_beta;
  const warnings = leapSecondWarnings(utc);
  return {
    bjd: addDays(ttToTdb(tt), light_time_s / DAY_S.value),
    utc,
    light_time_s,
    observer_factor: (1 + dot(beta, n)) / (Math.sqrt(1 - dot(beta, beta)) * (1 - state.potential)),
    heliocentric_factor: 1 + dot(state.heliocentric_beta, n),
    // A date that came without leap seconds does not need them; the Earth's rotation forgives some.
    warnings: scale === "utc" ? warnings : [],
  };
}

/**
 * Barycentric over observed wavelength at an instant: 1 + v/c, with λ_bary = λ_obs × factor. See
 * {@linkcode BarycentricMoment}.
 *
 * @param utc Date at the observatory, UTC.
 * @param sight Target and observatory.
 * @returns The factor.
 * @throws {InputError} As {@linkcode midExposureBjd}.
 *
 * @example The Earth's orbit moves lines by up to 30 km/s
 * ```ts
 * import { barycentricFactor } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const factor = barycentricFactor([2451545, 0], { target: { ra_deg: 0, dec_deg: 0 } });
 * assertAlmostEquals((factor - 1) * 299792.458, -29.8, 0.1);
 * ```
 */
export function barycentricFactor(utc: SplitDate, sight: SightLine): number {
  return midExposureBjd({ date: utc, marks: "mid" }, sight).observer_factor;
}
