import { AstroTime, BaryState, Body, Observer, ObserverState } from "astronomy-engine";
import {
  ASTRONOMICAL_UNIT_M,
  DAY_S,
  GM_EARTH_M3_S2,
  GM_SUN_M3_S2,
  SPEED_OF_LIGHT_KMS,
} from "../constants.ts";
import { daysBetween, type SplitDate } from "./bjd.ts";
import { requireSite, type Site } from "./site.ts";
import { ttToUtc } from "./time_scales.ts";

type Vector = readonly [x: number, y: number, z: number];

const AU_KM = ASTRONOMICAL_UNIT_M.value / 1000;
const KMS = AU_KM / DAY_S.value;
const c = SPEED_OF_LIGHT_KMS.value;

/** Where an observer is and how fast, in ICRS axes. */
export interface ObserverState {
  /** From the barycentre of the solar system, light seconds. */
  readonly barycentric_s: Vector;
  /** Velocity against it, in units of the speed of light. */
  readonly barycentric_beta: Vector;
  /** From the centre of the Sun, light seconds. */
  readonly heliocentric_s: Vector;
  /** Velocity against it, in units of the speed of light. */
  readonly heliocentric_beta: Vector;
  /** Potential of Sun and Earth over c², positive. */
  readonly potential: number;
}

interface State {
  readonly x: number;
  readonly y: number;
  readonly z: number;
  readonly vx: number;
  readonly vy: number;
  readonly vz: number;
}

const place = ({ x, y, z }: State): Vector => [x * AU_KM / c, y * AU_KM / c, z * AU_KM / c];
const motion = ({ vx, vy, vz }: State): Vector => [vx * KMS / c, vy * KMS / c, vz * KMS / c];
const sum = (a: Vector, b: Vector): Vector => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
const difference = (a: Vector, b: Vector): Vector => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];

/**
 * State of an observer on the ground, or at the centre of the Earth when there is no site, at a TT date.
 * Against a full ephemeris the Earth is within 10 ms and 2 m/s.
 */
export function observerState(tt: SplitDate, site: Site | null): ObserverState {
  const since = daysBetween(tt, [2451545, 0]);
  const time = AstroTime.FromTerrestrialTime(since);
  const earth = BaryState(Body.Earth, time);
  const sun = BaryState(Body.Sun, time);
  let barycentric_s = place(earth);
  let barycentric_beta = motion(earth);
  // At the centre of the Earth its own potential means nothing: that of the ground is used.
  let radius_km = 6371;
  if (site !== null) {
    const { latitude_deg, longitude_east_deg, height_m } = requireSite(site);
    // The Earth's rotation follows UT1, within 0.9 s of UTC: 0.04 m/s.
    const turn = new AstroTime(daysBetween(ttToUtc(tt), [2451545, 0]));
    const observer = new Observer(latitude_deg, longitude_east_deg, height_m);
    const ground = ObserverState(turn, observer, false);
    barycentric_s = sum(barycentric_s, place(ground));
    barycentric_beta = sum(barycentric_beta, motion(ground));
    radius_km = Math.hypot(ground.x, ground.y, ground.z) * AU_KM;
  }
  const heliocentric_s = difference(barycentric_s, place(sun));
  const c2 = (c * 1000) ** 2;
  return {
    barycentric_s,
    barycentric_beta,
    heliocentric_s,
    heliocentric_beta: difference(barycentric_beta, motion(sun)),
    potential: GM_SUN_M3_S2.value / (Math.hypot(...heliocentric_s) * c * 1000 * c2) +
      GM_EARTH_M3_S2.value / (radius_km * 1000 * c2),
  };
}
