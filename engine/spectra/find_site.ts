import { type Site, siteFromGeocentric } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import type { Fact, Facts } from "./facts.ts";
import { firstRead, unreadError, type UnreadFact, unreadNote } from "./first_read.ts";
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
function angle(fact: Fact): number | null {
  const letter = /^(.*?)\s*([NSEW])$/i.exec(fact.text);
  const text = letter?.[1] ?? fact.text;
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

const within = (value: number | null, limit: number) =>
  value !== null && Math.abs(value) <= limit ? value : null;

// The three keys of a place; what of them is there and no number is passed over, and told.
function three(facts: Facts, axes: readonly string[], unread: UnreadFact[]): number[] | null {
  const values = axes.map((axis) => {
    const fact = facts.find(`OBSGEO-${axis}`);
    const value = fact === undefined ? null : angle(fact);
    if (fact !== undefined && value === null) unread.push({ fact, rule: "it must be a number" });
    return value;
  });
  return values.every((value) => value !== null) ? values : null;
}

function obsgeo(facts: Facts, unread: UnreadFact[]): FoundSite | null {
  const [x, y, z] = three(facts, ["X", "Y", "Z"], unread) ?? [0, 0, 0];
  const radius = Math.hypot(x!, y!, z!);
  if (radius > 6.2e6 && radius < 6.6e6) {
    return decided(siteFromGeocentric([x!, y!, z!]), "OBSGEO-X, -Y, -Z");
  }
  // Zeros are a header that was never filled in.
  if (radius > 0) {
    const rule = "OBSGEO-X, -Y, -Z must be metres from the centre of the Earth to the telescope";
    unread.push({ fact: facts.find("OBSGEO-X")!, rule });
  }
  const [l, b, h] = three(facts, ["L", "B", "H"], unread) ?? [];
  if (l !== undefined && Math.abs(b!) <= 90) {
    return decided({ latitude_deg: b!, longitude_east_deg: l, height_m: h! }, "OBSGEO-L, -B, -H");
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
 * @returns The site; null when nothing says.
 * @throws {InputError} When a coordinate is there and cannot be read, with its value and key.
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
  const action = "read place of observatory";
  const passed: UnreadFact[] = [];
  const stated = ["latitude", "longitude", "longitude_west", "height"].some((role) => role in keys);
  if (!stated) {
    const standard = obsgeo(facts, passed);
    if (standard !== null) return standard;
  }
  const west = keys["longitude_west"];
  const named = (role: "latitude" | "longitude" | "height", limit: number, rule: string) =>
    firstRead(facts, {
      keys: role === "longitude" && west !== undefined
        ? [west]
        : keys[role] === undefined
        ? SITE_KEYS[role]
        : [keys[role]],
      read: (fact) => within(angle(fact), limit),
      action,
      rule: `${role} must be ${rule}`,
    });
  const latitude = named("latitude", 90, "sexagesimal, or a number from -90 to 90 degrees");
  const longitude = named("longitude", 360, "sexagesimal, or a number from -360 to 360 degrees");
  if (latitude === null || longitude === null) {
    if (passed.length > 0) throw unreadError(passed[0]!, { action });
    return null;
  }
  const height = named("height", 1e5, "a number of metres");
  const { comment } = longitude.fact;
  const isWest = west !== undefined || /\bwest(ward|ern)?\b/i.test(comment) &&
      !/\beast/i.test(comment);
  const east = isWest ? -longitude.value : longitude.value;
  const used = [latitude, longitude, height].filter((one) => one !== null);
  passed.push(...used.flatMap(({ unread }) => unread));
  return decided(
    {
      latitude_deg: latitude.value,
      longitude_east_deg: east > 180 ? east - 360 : east < -180 ? east + 360 : east,
      height_m: height?.value ?? 0,
    },
    `${used.map(({ fact }) => fact.key).join(", ")}${isWest ? " (west positive)" : ""}${
      height === null ? " (no height: 0 m)" : ""
    }${unreadNote(passed)}`,
    height === null,
  );
}
