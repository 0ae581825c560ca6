import { DAY_S as DAY, GM_SUN_M3_S2, SOLAR_RADIUS_M } from "../constants.ts";
import { InputError } from "../errors.ts";

// Everything below is in km, s and solar masses.
const SOLAR_PARAMETER = GM_SUN_M3_S2.value / 1e9;
const SOLAR_RADIUS_KM = SOLAR_RADIUS_M.value / 1e3;
const DAY_S = DAY.value;

/** What follows from the two projected speeds of a binary. */
export interface KeplerMasses {
  /** Mass of the accretor, solar. */
  readonly accretor_msun: number;
  /** Mass of the donor, solar. */
  readonly donor_msun: number;
  /** Separation of the two centres (semi-major axis), solar radii. */
  readonly separation_rsun: number;
}

/** The orbit from which masses follow. */
export interface KeplerOrbit {
  /** Period, d. */
  readonly period_d: number;
  /** Projected orbital speed of the accretor, km/s. */
  readonly k_accretor_kms: number;
  /** Projected orbital speed of the donor, km/s. */
  readonly k_donor_kms: number;
  /** Inclination, degrees. @default {90} */
  readonly inclination_deg?: number;
  /** Eccentricity. @default {0} */
  readonly eccentricity?: number;
}

/** Throws unless positive. */
function requirePositive(value: number, key: string, unit: string): void {
  if (value > 0 && Number.isFinite(value)) return;
  throw new InputError({
    action: "apply Kepler's third law",
    rule: `${key} must be positive`,
    value,
    unit,
    key,
  });
}

/** Throws unless the orbit is closed. */
function requireEllipse(eccentricity: number): void {
  if (eccentricity >= 0 && eccentricity < 1) return;
  throw new InputError({
    action: "apply Kepler's third law",
    rule: "eccentricity must be at least 0 and below 1",
    value: eccentricity,
    key: "eccentricity",
  });
}

/**
 * Separation of two stars by Kepler's third law, a³ = G(M1+M2)·P²/4π², with the IAU 2015 nominal
 * solar mass parameter GM☉ (G on its own is known to 2e-5 only).
 *
 * @param total_mass_msun M1 + M2, solar.
 * @param period_d Period, d.
 * @returns Separation in nominal solar radii.
 * @throws {InputError} When mass or period is not positive.
 *
 * @example The Earth
 * ```ts
 * import { keplerSeparation } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(keplerSeparation(1, 365.2569), 215.032, 0.001);
 * ```
 */
export function keplerSeparation(total_mass_msun: number, period_d: number): number {
  requirePositive(total_mass_msun, "mass", "Msun");
  requirePositive(period_d, "period_d", "d");
  const turn = period_d * DAY_S / (2 * Math.PI);
  return Math.cbrt(SOLAR_PARAMETER * total_mass_msun * turn * turn) / SOLAR_RADIUS_KM;
}

/**
 * Total mass from separation and period: the inverse of {@linkcode keplerSeparation}.
 *
 * @param separation_rsun Separation, nominal solar radii.
 * @param period_d Period, d.
 * @returns M1 + M2, solar.
 * @throws {InputError} When separation or period is not positive.
 *
 * @example
 * ```ts
 * import { keplerSeparation, keplerTotalMass } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(keplerTotalMass(keplerSeparation(0.7, 0.08), 0.08), 0.7, 1e-12);
 * ```
 */
export function keplerTotalMass(separation_rsun: number, period_d: number): number {
  requirePositive(separation_rsun, "separation_rsun", "Rsun");
  requirePositive(period_d, "period_d", "d");
  const turn = period_d * DAY_S / (2 * Math.PI);
  return (separation_rsun * SOLAR_RADIUS_KM) ** 3 / (SOLAR_PARAMETER * turn * turn);
}

/**
 * Period from total mass and separation: the inverse of {@linkcode keplerSeparation}.
 *
 * @param total_mass_msun M1 + M2, solar.
 * @param separation_rsun Separation, nominal solar radii.
 * @returns Period, d.
 * @throws {InputError} When mass or separation is not positive.
 *
 * @example
 * ```ts
 * import { keplerPeriod, keplerSeparation } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(keplerPeriod(0.7, keplerSeparation(0.7, 0.08)), 0.08, 1e-13);
 * ```
 */
export function keplerPeriod(total_mass_msun: number, separation_rsun: number): number {
  requirePositive(total_mass_msun, "mass", "Msun");
  requirePositive(separation_rsun, "separation_rsun", "Rsun");
  const cube = (separation_rsun * SOLAR_RADIUS_KM) ** 3;
  return 2 * Math.PI * Math.sqrt(cube / (SOLAR_PARAMETER * total_mass_msun)) / DAY_S;
}

/**
 * Mass function P·K³·(1−e²)^{3/2} / 2πG: the least mass that the unseen star can have.
 *
 * @param k_kms Projected orbital speed of the star that is seen, km/s.
 * @param period_d Period, d.
 * @param options Eccentricity.
 * @returns M³·sin³i/(M1+M2)², solar, with M the mass of the *other* star.
 * @throws {InputError} When speed or period is not positive, or the eccentricity not in [0, 1).
 *
 * @example A donor that moves at 433 km/s in 7.75 h circles something above 2.7 solar masses
 * ```ts
 * import { massFunction } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(massFunction(433, 0.323014), 2.717, 0.001);
 * ```
 */
export function massFunction(k_kms: number, period_d: number, options: {
  /** @default {0} */
  readonly eccentricity?: number;
} = {}): number {
  const { eccentricity = 0 } = options;
  requirePositive(k_kms, "k_kms", "km/s");
  requirePositive(period_d, "period_d", "d");
  requireEllipse(eccentricity);
  const turn = period_d * DAY_S / (2 * Math.PI);
  return turn * k_kms ** 3 * (1 - eccentricity ** 2) ** 1.5 / SOLAR_PARAMETER;
}

/**
 * Masses and separation from period, both projected speeds and inclination.
 *
 * @param orbit The orbit. At the default inclination of 90° the masses are M·sin³i.
 * @returns Masses and separation.
 * @throws {InputError} When a number is not positive or the inclination is not in (0, 90].
 *
 * @example
 * ```ts
 * import { keplerMasses } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const orbit = { period_d: 0.25, k_accretor_kms: 120, k_donor_kms: 150, inclination_deg: 45 };
 * const { accretor_msun, donor_msun } = keplerMasses(orbit);
 * assertAlmostEquals(donor_msun / accretor_msun, 120 / 150, 1e-12);
 * ```
 */
export function keplerMasses(orbit: KeplerOrbit): KeplerMasses {
  const { period_d, k_accretor_kms, k_donor_kms, inclination_deg = 90, eccentricity = 0 } = orbit;
  requirePositive(period_d, "period_d", "d");
  requirePositive(k_accretor_kms, "k_accretor_kms", "km/s");
  requirePositive(k_donor_kms, "k_donor_kms", "km/s");
  requireEllipse(eccentricity);
  if (!(inclination_deg > 0 && inclination_deg <= 90)) {
    throw new InputError({
      action: "apply Kepler's third law",
      rule: "inclination must be above 0 and at most 90 deg",
      value: inclination_deg,
      unit: "deg",
      key: "inclination_deg",
    });
  }
  const sine = Math.sin(inclination_deg * Math.PI / 180);
  const flattening = Math.sqrt(1 - eccentricity ** 2);
  const sum = (k_accretor_kms + k_donor_kms) * flattening / sine;
  const turn = period_d * DAY_S / (2 * Math.PI);
  const total = turn * sum ** 3 / SOLAR_PARAMETER;
  const share = k_accretor_kms / (k_accretor_kms + k_donor_kms);
  return {
    accretor_msun: total * (1 - share),
    donor_msun: total * share,
    separation_rsun: turn * sum / SOLAR_RADIUS_KM,
  };
}

/**
 * Sum of the two stars' true orbital speeds on a circular orbit, 2πa/P: K1 + K2 is this times the
 * sine of the inclination.
 *
 * @param separation_rsun Separation, nominal solar radii.
 * @param period_d Period, d.
 * @returns Speed of one star relative to the other, km/s.
 * @throws {InputError} When separation or period is not positive.
 *
 * @example
 * ```ts
 * import { keplerMasses, orbitalSpeed } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const orbit = { period_d: 0.08, k_accretor_kms: 70, k_donor_kms: 430 };
 * assertAlmostEquals(orbitalSpeed(keplerMasses(orbit).separation_rsun, 0.08), 500, 1e-9);
 * ```
 */
export function orbitalSpeed(separation_rsun: number, period_d: number): number {
  requirePositive(separation_rsun, "separation_rsun", "Rsun");
  requirePositive(period_d, "period_d", "d");
  return 2 * Math.PI * separation_rsun * SOLAR_RADIUS_KM / (period_d * DAY_S);
}
