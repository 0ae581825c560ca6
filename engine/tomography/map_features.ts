import { normalQuantile, normalTail } from "../numerics/mod.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import { mapExcess } from "./map_excess.ts";
import type { FollowedFeature, MapSpread } from "./map_replicas.ts";
import { mapStep } from "./map_shape.ts";
import type { BinaryPart, PartFinder } from "./nearest_part.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A compact excess over the axisymmetric part of a map. */
export interface MapFeature extends MapPlace {
  /** One standard deviation of Vx, km/s; null without replicas. */
  readonly vx_error_kms: number | null;
  /** One standard deviation of Vy, km/s; null without replicas. */
  readonly vy_error_kms: number | null;
  /** Flux of the excess over that of the whole map. Maps bias it: an error of it comes from a fit. */
  readonly flux_fraction: number;
  /**
   * Height of the excess over its scatter among replicas, lowered by the number of places searched,
   * in standard deviations; null without replicas.
   */
  readonly significance_sigma: number | null;
  /** The nearest part of the binary; null when the zero of phase is not the donor's. */
  readonly nearest: BinaryPart | null;
  /**
   * Whether it lies at speeds about the accretor that no Keplerian disc within the rim has; null when
   * the rim's speed was not given.
   */
  readonly forbidden_to_disc: boolean | null;
}

/** Options of {@linkcode mapFeatures}. */
export interface MapFeaturesOptions {
  /** Resolution (FWHM) of the map, km/s. */
  readonly resolution_kms: number;
  /**
   * Centre of the axisymmetric part: the accretor, (0, −K1).
   *
   * @default {{ vx_kms: 0, vy_kms: 0 }}
   */
  readonly centre?: MapPlace;
  /**
   * The scatter of the map and of its features, from {@linkcode resampleMaps} with the peaks of
   * {@linkcode featurePeaks} and the same centre and resolution.
   *
   * @default {null}
   */
  readonly spread?: MapSpread | null;
  /**
   * Maps of the same data with more and with less regularisation, as twice and half the weight: how
   * far they move a feature goes into its error.
   *
   * @default {[]}
   */
  readonly alternatives?: readonly VelocityMap[];
  /**
   * The map of the map, from {@linkcode remakeMap}: how far the inversion moves a feature once more is
   * taken off its place. Total variation draws features towards brighter ground and needs it.
   *
   * @default {null}
   */
  readonly remade?: VelocityMap | null;
  /**
   * Error of the systemic velocity, km/s: it moves every feature along with the whole data.
   *
   * @default {0}
   */
  readonly systemic_error_kms?: number;
  /**
   * Error of the zero of phase, cycles: it turns the map.
   *
   * @default {0}
   */
  readonly phase_error?: number;
  /**
   * Names places; from {@linkcode partFinder}. Null when the zero of phase is not the donor's.
   *
   * @default {null}
   */
  readonly find_part?: PartFinder | null;
  /**
   * Keplerian speed at the disc's rim, km/s.
   *
   * @default {null}
   */
  readonly rim_speed_kms?: number | null;
  /**
   * Least significance, standard deviations.
   *
   * @default {3}
   */
  readonly least_sigma?: number;
  /**
   * Largest number of features.
   *
   * @default {8}
   */
  readonly limit?: number;
}

/** Peaks below this share of the highest are not looked at. */
const LEAST_PEAK = 0.05;

/** Most peaks that are looked at, highest first. */
const MOST_PEAKS = 40;

/**
 * Pixels that may be the peaks of features: where the excess over the axisymmetric part, smoothed to
 * the resolution, is higher than around, within the circle of the half-width.
 *
 * @param map The map.
 * @param options Resolution and centre.
 * @returns Pixels, highest first, no more than 40.
 *
 * @example
 * ```ts
 * import { featurePeaks } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const intensity = new Float64Array(441);
 * intensity[6 * 21 + 9] = 1;
 * const map = { pixels: 21, half_width_kms: 100, intensity };
 * assertEquals(featurePeaks(map, { resolution_kms: 20 }), [6 * 21 + 9]);
 * ```
 */
export function featurePeaks(
  map: VelocityMap,
  options: Pick<MapFeaturesOptions, "resolution_kms" | "centre">,
): number[] {
  const { resolution_kms, centre = { vx_kms: 0, vy_kms: 0 } } = options;
  const excess = mapExcess(map, { centre, resolution_kms });
  const { pixels, half_width_kms } = map;
  const middle = (pixels - 1) / 2;
  // Beyond the circle not every profile was seen, and at its edge an excess has no other side.
  const inside = (k: number) =>
    Math.hypot(k % pixels - middle, Math.floor(k / pixels) - middle) * mapStep(map) <
      half_width_kms - 0.5 * resolution_kms;
  return excess.peaks(LEAST_PEAK)
    .filter(inside)
    .sort((a, b) => excess.values[b]! - excess.values[a]! || a - b)
    .slice(0, MOST_PEAKS);
}

/**
 * Finds compact excesses over the part of a map that is axisymmetric about the accretor: peaks of the
 * excess smoothed to the resolution. The place is the centroid under a Gaussian window; the flux
 * is twice what lies above half the peak, which is exact for a Gaussian. Given the map of the map, the
 * place has the inversion's bias taken off. Errors are the scatter of the same measurement on replicas, what
 * more or less regularisation moves, and those of γ and phase zero. Significance counts the resolution
 * elements searched.
 *
 * @param map The map.
 * @param options Resolution, centre, scatter.
 * @returns Features, most significant first (highest first without replicas).
 *
 * @example
 * ```ts
 * import { mapFeatures } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const intensity = Float64Array.from({ length: 81 * 81 }, (_, k) => {
 *   const vx = (k % 81) * 10 - 400, vy = Math.floor(k / 81) * 10 - 400;
 *   return 1 + Math.exp(-((vx + 150) ** 2 + (vy - 80) ** 2) / (2 * 40 ** 2));
 * });
 * const map = { pixels: 81, half_width_kms: 400, intensity };
 * const [feature] = mapFeatures(map, { resolution_kms: 50 });
 * assertAlmostEquals(feature?.vx_kms ?? NaN, -150, 1);
 * assertAlmostEquals(feature?.vy_kms ?? NaN, 80, 1);
 * ```
 */
export function mapFeatures(map: VelocityMap, options: MapFeaturesOptions): MapFeature[] {
  const { resolution_kms, spread = null, find_part = null, least_sigma = 3, limit = 8 } = options;
  const { remade = null } = options;
  const { centre = { vx_kms: 0, vy_kms: 0 }, rim_speed_kms = null } = options;
  const excess = mapExcess(map, { centre, resolution_kms });
  const area = (map.pixels * mapStep(map)) ** 2;
  const places = Math.max(1, area / (Math.PI * (0.5 * resolution_kms) ** 2));
  const others = (options.alternatives ?? []).map((m) => mapExcess(m, { centre, resolution_kms }));
  const again = remade && mapExcess(remade, { centre, resolution_kms });
  const features: (MapFeature & { readonly rank: number })[] = [];
  featurePeaks(map, options).forEach((peak, f) => {
    const seen = excess.blobAt(peak);
    if (seen === null) return;
    const blob = { ...seen, ...unmoved(seen, again && again.blobAt(again.climb(peak))) };
    const followed = spread?.features[f];
    const moved = others.flatMap((e) => e.blobAt(e.climb(peak)) ?? []);
    const errors = followed === undefined
      ? null
      : placeErrors(followed, { ...options, blob: seen, moved });
    const significance = followed === undefined
      ? null
      : globalSigma(excess.values[peak]! / deviation(followed.height), places);
    if (significance !== null && !(significance >= least_sigma)) return;
    const reach = Math.max(resolution_kms, 2 * Math.max(errors?.vx ?? 0, errors?.vy ?? 0));
    const speed = Math.hypot(blob.vx_kms - centre.vx_kms, blob.vy_kms - centre.vy_kms);
    features.push({
      ...blob,
      vx_error_kms: errors && errors.vx,
      vy_error_kms: errors && errors.vy,
      significance_sigma: significance,
      nearest: find_part && find_part(blob, reach),
      forbidden_to_disc: rim_speed_kms === null ? null : speed + reach < rim_speed_kms,
      rank: significance ?? excess.values[peak]!,
    });
  });
  return features.sort((a, b) => b.rank - a.rank).slice(0, limit)
    .map(({ rank: _rank, ...feature }) => feature);
}

/** A place less what the inversion moved it, judged by how far it moves it once more. */
function unmoved(seen: MapPlace, again: MapPlace | null): MapPlace {
  const { vx_kms, vy_kms } = seen;
  if (again === null) return { vx_kms, vy_kms };
  return { vx_kms: 2 * vx_kms - again.vx_kms, vy_kms: 2 * vy_kms - again.vy_kms };
}

/** Scatter among replicas, with γ and phase zero in quadrature. */
function placeErrors(
  followed: FollowedFeature,
  { blob, moved, systemic_error_kms = 0, phase_error = 0 }: MapFeaturesOptions & {
    readonly blob: MapPlace;
    readonly moved: readonly MapPlace[];
  },
): { vx: number; vy: number } {
  const turn = 2 * Math.PI * phase_error;
  const shift = (key: keyof MapPlace) =>
    Math.sqrt(moved.reduce((sum, m) => sum + (m[key] - blob[key]) ** 2, 0) / (moved.length || 1));
  return {
    vx: Math.hypot(
      ...[deviation(followed.vx_kms), shift("vx_kms"), turn * blob.vy_kms, systemic_error_kms],
    ),
    vy: Math.hypot(
      ...[deviation(followed.vy_kms), shift("vy_kms"), turn * blob.vx_kms, systemic_error_kms],
    ),
  };
}

function deviation(values: Float64Array): number {
  const kept = values.filter((v) => Number.isFinite(v));
  const mean = kept.reduce((a, b) => a + b, 0) / kept.length;
  return Math.sqrt(kept.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (kept.length - 1));
}

/** Significance after looking in many places; far in the tail by its asymptotic form. */
function globalSigma(local: number, places: number): number {
  const p = places * normalTail(local);
  if (p >= 0.5) return 0;
  if (p > 1e-12) return 0 - normalQuantile(p);
  return Math.sqrt(Math.max(0, local * local - 2 * Math.log(places)));
}
