import { InputError } from "../errors.ts";

/** Where a telescope stands, on the WGS 84 ellipsoid. */
export interface Site {
  /** Geodetic latitude, degrees, north positive. */
  readonly latitude_deg: number;
  /** Longitude, degrees, east positive. */
  readonly longitude_east_deg: number;
  /** Height above the ellipsoid, m. */
  readonly height_m: number;
}

// WGS 84 (NIMA TR8350.2).
const EQUATOR_M = 6_378_137;
const FLATTENING = 1 / 298.257223563;
const E2 = FLATTENING * (2 - FLATTENING);
const RADIAN = Math.PI / 180;

/**
 * Checks that a site is on or near the ground.
 *
 * @param site The site.
 * @returns The same site.
 * @throws {InputError} When a coordinate is out of range.
 *
 * @example
 * ```ts
 * import { requireSite } from "@millrace/millrace/sky";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(() => requireSite({ latitude_deg: 95, longitude_east_deg: 0, height_m: 0 }));
 * ```
 */
export function requireSite(site: Site): Site {
  const { latitude_deg, longitude_east_deg, height_m } = site;
  const checks = [
    ["latitude", latitude_deg, "deg", -90, 90],
    ["east longitude", longitude_east_deg, "deg", -360, 360],
    ["height", height_m, "m", -1000, 100_000],
  ] as const;
  for (const [name, value, unit, low, high] of checks) {
    if (value >= low && value <= high) continue;
    throw new InputError({
      action: "place the observatory",
      rule: `its ${name} must be from ${low} to ${high} ${unit}`,
      value,
      unit,
    });
  }
  return site;
}

/**
 * Site from geocentric coordinates, as in the header keys OBSGEO-X, -Y and -Z.
 *
 * @param geocentric_m x towards longitude 0, y towards 90° east, z towards the north pole, m.
 * @returns The site.
 * @throws {InputError} When the place is not near the ground.
 *
 * @example
 * ```ts
 * import { siteFromGeocentric } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(siteFromGeocentric([0, 6378137 + 2000, 0]).height_m, 2000, 1e-8);
 * ```
 */
export function siteFromGeocentric(
  [x, y, z]: readonly [x: number, y: number, z: number],
): Site {
  const distance = Math.hypot(x, y, z);
  if (!(distance > 6.3e6 && distance < 6.5e6)) {
    throw new InputError({
      action: "place the observatory",
      rule: "geocentric coordinates must lie near the ground, in metres",
      value: [x, y, z],
      unit: "m",
    });
  }
  const axis = Math.hypot(x, y);
  // Each round gains more than two digits: the eccentricity squared is 0.0067.
  let latitude = Math.atan2(z, axis * (1 - E2));
  let normal = EQUATOR_M;
  for (let i = 0; i < 10; i++) {
    normal = EQUATOR_M / Math.sqrt(1 - E2 * Math.sin(latitude) ** 2);
    latitude = Math.atan2(z + E2 * normal * Math.sin(latitude), axis);
  }
  const height = axis * Math.cos(latitude) + z * Math.sin(latitude) -
    EQUATOR_M * Math.sqrt(1 - E2 * Math.sin(latitude) ** 2);
  return requireSite({
    latitude_deg: latitude / RADIAN,
    longitude_east_deg: Math.atan2(y, x) / RADIAN,
    height_m: height,
  });
}

/**
 * Geocentric coordinates of a site: the inverse of {@linkcode siteFromGeocentric}.
 *
 * @param site The site.
 * @returns x, y, z, m.
 * @throws {InputError} When a coordinate is out of range.
 *
 * @example
 * ```ts
 * import { geocentricOfSite } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const [, , z] = geocentricOfSite({ latitude_deg: 90, longitude_east_deg: 0, height_m: 0 });
 * assertAlmostEquals(z, 6356752.3142, 1e-4);
 * ```
 */
export function geocentricOfSite(site: Site): [x: number, y: number, z: number] {
  const { latitude_deg, longitude_east_deg, height_m } = requireSite(site);
  const sin = Math.sin(latitude_deg * RADIAN);
  const cos = Math.cos(latitude_deg * RADIAN);
  const normal = EQUATOR_M / Math.sqrt(1 - E2 * sin * sin);
  const axis = (normal + height_m) * cos;
  return [
    axis * Math.cos(longitude_east_deg * RADIAN),
    axis * Math.sin(longitude_east_deg * RADIAN),
    (normal * (1 - E2) + height_m) * sin,
  ];
}
