import { normalQuantile, normalTail } from "../numerics/mod.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import type { MapExplainer } from "./explained_map.ts";
import { type FeatureLooks, featureLooks, movedCentres, ORIGIN } from "./feature_looks.ts";
import { type ExcessBlob, mapExcess, type MapExcessOptions } from "./map_excess.ts";
import type { FollowedFeature, MapSpread } from "./map_replicas.ts";
import { mapStep } from "./map_shape.ts";
import type { BinaryPart, PartFinder } from "./nearest_part.ts";
import type { SpotPlace } from "./simple_sources.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A compact excess over the axisymmetric part of a map. */
export interface MapFeature extends MapPlace {
  /** One standard deviation of Vx, km/s; null without replicas. */
  readonly vx_error_kms: number | null;
  /** One standard deviation of Vy, km/s; null without replicas. */
  readonly vy_error_kms: number | null;
  /** Flux of the excess over that of the whole map. Maps bias it. */
  readonly flux_fraction: number;
  /**
   * One standard deviation of that flux: what noise and the centre's error move it by. The map's bias is
   * not in it, so that an error of the true flux comes from a fit; null without replicas.
   */
  readonly flux_fraction_error: number | null;
  /**
   * Height of the excess over its scatter among replicas and what the centre's error moves it by, lowered
   * by the number of places searched, in standard deviations; null without replicas. With `explain` the
   * height is what is left beyond what sampling and inversion make of a round disc and of the features before it.
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
   * One standard deviation of the centre along each axis, km/s: that of K1 along Vy. Features are measured
   * about centres an error to either side, too, and half the difference goes into their errors.
   *
   * @default {{ vx_kms: 0, vy_kms: 0 }}
   */
  readonly centre_error_kms?: MapPlace;
  /**
   * What sampling and inversion alone make, from {@linkcode mapExplainer}.
   *
   * @default {null}
   */
  readonly explain?: MapExplainer | null;
  /**
   * The scatter of the map and of its features, from {@linkcode resampleMaps} with the peaks of
   * {@linkcode featurePeaks} and the same centre and resolution, and with `explain` what it gives for no
   * spots as `alone` of both.
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

/** A feature's shape is what hangs together with its peak above this share of it. */
const SHAPE = 0.4;

/** Most peaks that are looked at, highest first. */
const MOST_PEAKS = 40;

/**
 * Pixels that may be the peaks of features: where the excess over the axisymmetric part, smoothed to
 * the resolution, is higher than around, within the circle of the half-width.
 *
 * @param map The map.
 * @param options Resolution, centre, and what is taken off first.
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
  options:
    & Pick<MapFeaturesOptions, "resolution_kms" | "centre">
    & Pick<MapExcessOptions, "alone">,
): number[] {
  const { resolution_kms, centre = ORIGIN, alone = null } = options;
  const excess = mapExcess(map, { centre, resolution_kms, alone });
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
 * place has the inversion's bias taken off. Errors are the scatter of the same measurement on replicas,
 * what more or less regularisation moves, what the error of the centre moves, and those of γ and phase
 * zero. Significance counts the resolution elements searched.
 *
 * Few exposures make structures of their own: given `explain`, what they and the inversion make of a
 * round disc and of the features found so far is taken off before the next is looked for. Peaks within
 * a resolution of a feature are that feature.
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
  const { centre = ORIGIN, rim_speed_kms = null } = options;
  const explain = options.explain ?? null;
  const area = (map.pixels * mapStep(map)) ** 2;
  const places = Math.max(1, area / (Math.PI * (0.5 * resolution_kms) ** 2));
  const features: MapFeature[] = [];
  const sources: SpotPlace[] = [];
  const alone = explain && explain([]);
  const moved = spread === null ? [] : movedCentres(options);
  const peaks = featurePeaks(map, { ...options, alone });
  const measured = (alone: VelocityMap | null) => {
    const looks = featureLooks(map, { ...options, alone, moved });
    return peaks.flatMap((peak, f) => {
      const followed = spread?.features[f] ?? null;
      return seenAt(peak, { ...options, looks, followed, places }) ?? [];
    }).sort((a, b) => b.rank - a.rank);
  };
  const merged = ({ seen }: Seen) => features.some((one) => apart(one, seen) < resolution_kms);
  let left = measured(alone);
  while (features.length < limit) {
    const best = left.find((one) => !merged(one));
    if (best === undefined || !((best.significance ?? Infinity) >= least_sigma)) break;
    const { blob, errors, significance } = best;
    const reach = Math.max(resolution_kms, 2 * Math.max(errors?.vx ?? 0, errors?.vy ?? 0));
    features.push({
      ...blob,
      vx_error_kms: errors && errors.vx,
      vy_error_kms: errors && errors.vy,
      flux_fraction_error: errors && errors.flux,
      significance_sigma: significance,
      nearest: find_part && find_part(blob, reach),
      forbidden_to_disc: rim_speed_kms === null
        ? null
        : apart(blob, centre) + reach < rim_speed_kms,
    });
    // Without scatter there is no telling which peaks are worth explaining.
    if (explain === null || spread === null || features.length === limit) continue;
    sources.push({ ...best.seen, shape: best.shape() });
    left = measured(explain(sources));
  }
  return features;
}

interface Seen {
  /** As it is in the map. */
  readonly seen: ExcessBlob;
  /** The excess that hangs together with it. */
  readonly shape: () => Float64Array;
  /** With the inversion's bias taken off its place. */
  readonly blob: ExcessBlob;
  readonly errors: Errors | null;
  readonly significance: number | null;
  readonly rank: number;
}

/** A peak, measured. */
function seenAt(
  peak: number,
  options: MapFeaturesOptions & {
    readonly looks: FeatureLooks;
    readonly followed: FollowedFeature | null;
    readonly places: number;
  },
): Seen | null {
  const { looks: { excess, others, again, beside }, followed, places } = options;
  const top = excess.climb(peak);
  const seen = excess.blobAt(top);
  if (seen === null) return null;
  const blob = { ...seen, ...unmoved(seen, again && again.blobAt(again.climb(peak))) };
  const height = excess.values[top]!;
  const shape = () => excess.regionAt(top, SHAPE);
  if (followed === null) {
    return { seen, shape, blob, errors: null, significance: null, rank: height };
  }
  const moved = others.flatMap((e) => e.blobAt(e.climb(peak)) ?? []);
  const halves = beside.map(([low, high]) => ({
    low: low.blobAt(low.climb(peak)),
    high: high.blobAt(high.climb(peak)),
    height: (high.values[high.climb(peak)]! - low.values[low.climb(peak)]!) / 2,
  }));
  const errors = errorsOf(followed, { ...options, blob: seen, moved, halves });
  const scatter = Math.hypot(deviation(followed.height), ...halves.map((half) => half.height));
  const significance = globalSigma(height / scatter, places);
  return { seen, shape, blob, errors, significance, rank: significance };
}

function apart(a: MapPlace, b: MapPlace): number {
  return Math.hypot(a.vx_kms - b.vx_kms, a.vy_kms - b.vy_kms);
}

/** A place less what the inversion moved it, judged by how far it moves it once more. */
function unmoved(seen: MapPlace, again: MapPlace | null): MapPlace {
  const { vx_kms, vy_kms } = seen;
  if (again === null) return { vx_kms, vy_kms };
  return { vx_kms: 2 * vx_kms - again.vx_kms, vy_kms: 2 * vy_kms - again.vy_kms };
}

interface Errors {
  readonly vx: number;
  readonly vy: number;
  readonly flux: number;
}

interface Half {
  readonly low: ExcessBlob | null;
  readonly high: ExcessBlob | null;
}

/** Scatter among replicas, with regularisation, centre, γ and phase zero in quadrature. */
function errorsOf(
  followed: FollowedFeature,
  { blob, moved, halves, systemic_error_kms = 0, phase_error = 0 }: MapFeaturesOptions & {
    readonly blob: ExcessBlob;
    readonly moved: readonly ExcessBlob[];
    readonly halves: readonly Half[];
  },
): Errors {
  const turn = 2 * Math.PI * phase_error;
  const error = (key: keyof ExcessBlob) => {
    const square = moved.reduce((sum, m) => sum + (m[key] - blob[key]) ** 2, 0);
    return Math.hypot(
      deviation(followed[key]),
      Math.sqrt(square / (moved.length || 1)),
      ...halves.map(({ low, high }) => low && high ? (high[key] - low[key]) / 2 : 0),
    );
  };
  return {
    vx: Math.hypot(error("vx_kms"), turn * blob.vy_kms, systemic_error_kms),
    vy: Math.hypot(error("vy_kms"), turn * blob.vx_kms, systemic_error_kms),
    flux: error("flux_fraction"),
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
