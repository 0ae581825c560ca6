import { type Site, siteFromGeocentric } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { type Fact, type Facts, firstFact } from "./facts.ts";
import { numberOf, sexagesimalOf } from "./number_text.ts";

/** Keys looked up for a site beside OBSGEO-X/Y/Z and OBSGEO-L/B/H. */
export const SITE_KEYS = {
  latitude: [
    "LATITUDE",
    "SITELAT",
    "OBS-LAT",
    "OBSLAT",
    "LAT-OBS",
    "TELLAT",
    "GEOLAT",
    "OBSGEO-LAT",
    "LAT",
  ],
  longitude: [
    "LONGITUD",
    "LONGITUDE",
    "SITELONG",
    "SITELON",
    "OBS-LONG",
    "OBSLONG",
    "LONG-OBS",
    "LON-OBS",
    "TELLONG",
    "GEOLON",
    "LONG",
    "LON",
  ],
  height: [
    "HEIGHT",
    "SITEALT",
    "SITEELEV",
    "ALTITUDE",
    "ELEVATIO",
    "OBS-ELEV",
    "OBSALT",
    "ALT-OBS",
    "TELALT",
    "GEOELEV",
    "HEIGHT_M",
  ],
} as const;

// An angle, plain or sexagesimal; a letter behind it says which way it counts.
function angle(fact: Fact | undefined): number | null {
  const letter = /^(.*?)\s*([NSEW])$/i.exec(fact?.text ?? "");
  const text = letter?.[1] ?? fact?.text ?? "";
  const value = numberOf(text) ?? sexagesimalOf(text);
  return value !== null && /[SW]/i.test(letter?.[2] ?? "") ? -value : value;
}

/** A site and how it was found. */
export interface FoundSite {
  /** The site. */
  readonly site: Site;
  /** What was decided. */
  readonly decision: OneDecision;
}

function decided(site: Site, from: string, assumed = false): FoundSite {
  const { latitude_deg, longitude_east_deg, height_m } = site;
  const value = `${latitude_deg.toFixed(4)} deg N, ${longitude_east_deg.toFixed(4)} deg E, ${
    height_m.toFixed(0)
  } m`;
  return { site, decision: { what: "site", value, from, assumed } };
}

function obsgeo(facts: Facts): FoundSite | null {
  const [x, y, z] = ["X", "Y", "Z"].map((axis) => angle(facts.find(`OBSGEO-${axis}`)));
  if (typeof x === "number" && typeof y === "number" && typeof z === "number") {
    const radius = Math.hypot(x, y, z);
    if (radius > 6.2e6 && radius < 6.6e6) {
      return decided(siteFromGeocentric([x, y, z]), "OBSGEO-X, -Y, -Z");
    }
  }
  const [l, b, h] = ["L", "B", "H"].map((axis) => angle(facts.find(`OBSGEO-${axis}`)));
  if (typeof l === "number" && typeof b === "number" && typeof h === "number") {
    return decided({ latitude_deg: b, longitude_east_deg: l, height_m: h }, "OBSGEO-L, -B, -H");
  }
  return null;
}

/**
 * Finds where the telescope stood: OBSGEO of FITS 4.0 first, then keys in common use. Longitudes
 * are east positive unless the comment says west, or the key was named as such.
 *
 * @param facts The facts of an exposure.
 * @param options A site known better; names of keys by what they hold: `latitude`, `longitude`,
 * `longitude_west`, `height`.
 * @returns The site; null when it cannot be had.
 *
 * @example
 * ```ts
 * import { findSite, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const found = findSite(namedFacts([["SITELAT", "-30:15:00"], ["SITELONG", "-70:45:00"], ["SITEALT", "2700"]]));
 * assertEquals(found?.site, { latitude_deg: -30.25, longitude_east_deg: -70.75, height_m: 2700 });
 * ```
 */
export function findSite(
  facts: Facts,
  options: {
    readonly site?: Site | undefined;
    readonly keys?: Readonly<Record<string, string>>;
  } = {},
): FoundSite | null {
  const { site, keys = {} } = options;
  if (site !== undefined) return decided(site, "sky.site of the target file");
  const named = (role: string, usual: readonly string[]) =>
    firstFact(facts, keys[role] === undefined ? usual : [keys[role]]);
  const stated = ["latitude", "longitude", "longitude_west", "height"].some((role) => role in keys);
  if (!stated) {
    const standard = obsgeo(facts);
    if (standard !== null) return standard;
  }
  const west = keys["longitude_west"];
  const latitude = named("latitude", SITE_KEYS.latitude);
  const longitude = west === undefined ? named("longitude", SITE_KEYS.longitude) : facts.find(west);
  const height = named("height", SITE_KEYS.height);
  const [b, l] = [angle(latitude), angle(longitude)];
  if (b === null || l === null || Math.abs(b) > 90 || Math.abs(l) > 360) return null;
  const isWest = west !== undefined || /\bwest(ward|ern)?\b/i.test(longitude!.comment) &&
      !/\beast/i.test(longitude!.comment);
  const east = isWest ? -l : l;
  const used = [latitude, longitude, height].filter((f) => f !== undefined).map((f) => f!.key);
  return decided(
    {
      latitude_deg: b,
      longitude_east_deg: east > 180 ? east - 360 : east < -180 ? east + 360 : east,
      height_m: angle(height) ?? 0,
    },
    `${used.join(", ")}${isWest ? " (west positive)" : ""}${
      height === undefined ? " (no height: 0 m)" : ""
    }`,
    height === undefined,
  );
}
