import { InputError } from "../errors.ts";

/** Where a target is on the sky, ICRS. */
export interface Direction {
  /** Right ascension, degrees. */
  readonly ra_deg: number;
  /** Declination, degrees. */
  readonly dec_deg: number;
}

const RADIAN = Math.PI / 180;

/** Unit vector of a direction. Checks its ranges. */
export function unitVector({ ra_deg, dec_deg }: Direction): [x: number, y: number, z: number] {
  if (!(ra_deg >= -360 && ra_deg <= 360 && dec_deg >= -90 && dec_deg <= 90)) {
    throw new InputError({
      action: "point at the target",
      rule: "right ascension must be from 0 to 360 and declination from -90 to 90 deg",
      value: [ra_deg, dec_deg],
      unit: "deg",
    });
  }
  const [ra, dec] = [ra_deg * RADIAN, dec_deg * RADIAN];
  return [Math.cos(dec) * Math.cos(ra), Math.cos(dec) * Math.sin(ra), Math.sin(dec)];
}

/**
 * ICRS direction of coordinates given for the mean equinox of another year, as "EQUINOX = 1950.0" in a header
 * (precession of IAU 2006: Capitaine, Wallace & Chapront 2003, A&A 412, 567). Precession of 50 years left out
 * would move times by up to 5 s and velocities by 300 m/s. The equinox of 1950 is taken as one of the modern
 * frame: the terms of the old catalogue's own, under 2″, are left out.
 *
 * @param direction Coordinates for that equinox.
 * @param equinox_year The year, as in 1950.0 or 2015.5.
 * @returns The direction, right ascension in [0, 360).
 * @throws {InputError} When the year is not from 1800 to 2200.
 *
 * @example
 * ```ts
 * import { directionFromEquinox } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * // Near the equator the right ascension grows by 0.64° in 50 years.
 * const { ra_deg } = directionFromEquinox({ ra_deg: 0, dec_deg: 0 }, 1950);
 * assertAlmostEquals(ra_deg, 0.6405, 1e-4);
 * ```
 */
export function directionFromEquinox(direction: Direction, equinox_year: number): Direction {
  const [x, y, z] = unitVector(direction);
  if (!(equinox_year >= 1800 && equinox_year <= 2200)) {
    throw new InputError({
      action: "precess coordinates",
      rule: "the equinox must be a year from 1800 to 2200",
      value: equinox_year,
    });
  }
  const t = (equinox_year - 2000) / 100;
  const arcsecond = RADIAN / 3600;
  const zeta = (2.650545 + t * (2306.083227 + t * (0.2988499 + t * 0.01801828))) * arcsecond;
  const zed = (-2.650545 + t * (2306.077181 + t * (1.0927348 + t * 0.01826837))) * arcsecond;
  const theta = t * (2004.191903 - t * (0.4294934 + t * 0.04182264)) * arcsecond;
  // Back from the date: turned about the pole of the date, tilted, turned about the pole of 2000.
  const [x1, y1] = [x * Math.cos(zed) + y * Math.sin(zed), y * Math.cos(zed) - x * Math.sin(zed)];
  const x2 = x1 * Math.cos(theta) + z * Math.sin(theta);
  const z2 = z * Math.cos(theta) - x1 * Math.sin(theta);
  const ra = (Math.atan2(y1, x2) - zeta) / RADIAN;
  return {
    ra_deg: ra - 360 * Math.floor(ra / 360),
    dec_deg: Math.atan2(z2, Math.hypot(x2, y1)) / RADIAN,
  };
}
