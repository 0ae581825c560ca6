import { normalQuantile, normalTail } from "../numerics/mod.ts";
import { axisymmetricPart, type MapPlace } from "./axisymmetric_part.ts";
import { blurMap } from "./blur_map.ts";
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
   * Maps of the same shape made from resampled data.
   *
   * @default {[]}
   */
  readonly replicas?: readonly VelocityMap[];
  /**
   * Names places; from {@linkcode partFinder}. Null when the zero of phase is not the donor's.
   *
   * @default {null}
   */
  readonly find_part?: PartFinder | null;
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

/**
 * Finds compact excesses over the part of a map that is axisymmetric about the accretor: peaks of the
 * excess smoothed to the resolution. The place is the centroid of what stands above half the
 * peak; the flux is twice what lies in there, which is exact for a Gaussian. Errors are the scatter
 * of the same measurement on replicas. Significance counts the resolution elements searched.
 *
 * @param map The map.
 * @param options Resolution, centre, replicas.
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
  const { resolution_kms, replicas = [], find_part = null, least_sigma = 3, limit = 8 } = options;
  const { centre = { vx_kms: 0, vy_kms: 0 } } = options;
  const excess = (m: VelocityMap): Float64Array => {
    const round = axisymmetricPart(m, { centre }).intensity;
    return blurMap(m.intensity.map((f, k) => f - round[k]!), { ...m, fwhm_kms: resolution_kms });
  };
  const here = excess(map);
  const scattered = replicas.map(excess);
  const total = map.intensity.reduce((a, b) => a + b, 0);
  const area = (map.pixels * mapStep(map)) ** 2;
  const places = Math.max(1, area / (Math.PI * (0.5 * resolution_kms) ** 2));

  const features: (MapFeature & { readonly height: number })[] = [];
  for (const peak of peaks(here, map.pixels)) {
    // The corners lie beyond the velocities on which every profile was seen.
    if (!(speedAt(peak, map) < map.half_width_kms)) continue;
    const found = blobAt(here, peak, map);
    if (found === null) continue;
    let spread: Spread | null = null;
    if (scattered.length > 1) {
      const again = scattered.map((e) =>
        blobAt(e, climb(e, peak, { map, reach_kms: resolution_kms }), map)
      );
      spread = spreadOf(again.filter((b) => b !== null), scattered.map((e) => e[peak]!));
    }
    const significance = spread && globalSigma(here[peak]! / spread.height, places);
    if (significance !== null && !(significance >= least_sigma)) continue;
    const reach = Math.max(resolution_kms, 2 * Math.max(spread?.vx ?? 0, spread?.vy ?? 0));
    features.push({
      vx_kms: found.vx,
      vy_kms: found.vy,
      vx_error_kms: spread && spread.vx,
      vy_error_kms: spread && spread.vy,
      flux_fraction: total > 0 ? found.sum / total : 0,
      significance_sigma: significance,
      nearest: find_part && find_part({ vx_kms: found.vx, vy_kms: found.vy }, reach),
      height: significance ?? here[peak]!,
    });
  }
  return features.sort((a, b) => b.height - a.height).slice(0, limit)
    .map(({ height: _height, ...feature }) => feature);
}

/** Peaks above a twentieth of the highest, within the map. */
function peaks(values: Float64Array, pixels: number): number[] {
  const floor = 0.05 * values.reduce((a, b) => Math.max(a, b), 0);
  const found: number[] = [];
  for (let row = 1; row < pixels - 1; row++) {
    for (let column = 1; column < pixels - 1; column++) {
      const k = row * pixels + column;
      if (values[k]! > floor && uphill(values, k, pixels) === k) found.push(k);
    }
  }
  return found;
}

function speedAt(k: number, map: VelocityMap): number {
  const column = k % map.pixels, row = (k - column) / map.pixels;
  const middle = (map.pixels - 1) / 2;
  return Math.hypot(column - middle, row - middle) * mapStep(map);
}

function uphill(values: Float64Array, k: number, pixels: number): number {
  let best = k;
  for (const j of [-pixels - 1, -pixels, -pixels + 1, -1, 1, pixels - 1, pixels, pixels + 1]) {
    const value = values[k + j];
    if (value !== undefined && value > values[best]!) best = k + j;
  }
  return best;
}

/** The peak that lies uphill of a pixel, as far as the reach. */
function climb(
  values: Float64Array,
  from: number,
  { map, reach_kms }: { readonly map: VelocityMap; readonly reach_kms: number },
): number {
  const steps = Math.ceil(reach_kms / mapStep(map));
  let k = from;
  for (let i = 0; i < steps; i++) {
    const next = uphill(values, k, map.pixels);
    if (next === k) break;
    k = next;
  }
  return k;
}

interface Blob {
  readonly vx: number;
  readonly vy: number;
  readonly sum: number;
}

/** Centroid above half the peak, and twice the sum in there. */
function blobAt(values: Float64Array, peak: number, map: VelocityMap): Blob | null {
  const { pixels, half_width_kms } = map;
  const step = mapStep(map);
  const half = 0.5 * values[peak]!;
  if (!(half > 0)) return null;
  const seen = new Set<number>([peak]);
  const queue = [peak];
  let weight = 0, x = 0, y = 0, sum = 0;
  for (let k = queue.pop(); k !== undefined; k = queue.pop()) {
    const column = k % pixels, row = (k - column) / pixels;
    const w = values[k]! - half;
    weight += w;
    x += w * column;
    y += w * row;
    sum += values[k]!;
    const around = [
      column > 0 ? k - 1 : -1,
      column < pixels - 1 ? k + 1 : -1,
      row > 0 ? k - pixels : -1,
      row < pixels - 1 ? k + pixels : -1,
    ];
    for (const j of around) {
      if (j < 0 || seen.has(j) || !(values[j]! > half)) continue;
      seen.add(j);
      queue.push(j);
    }
  }
  return {
    vx: x / weight * step - half_width_kms,
    vy: y / weight * step - half_width_kms,
    sum: 2 * sum,
  };
}

interface Spread {
  readonly vx: number;
  readonly vy: number;
  readonly height: number;
}

function spreadOf(blobs: readonly Blob[], heights: readonly number[]): Spread {
  return {
    vx: deviation(blobs.map((b) => b.vx)),
    vy: deviation(blobs.map((b) => b.vy)),
    height: deviation(heights),
  };
}

function deviation(values: readonly number[]): number {
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  return Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (values.length - 1));
}

/** Significance after looking in many places; far in the tail by its asymptotic form. */
function globalSigma(local: number, places: number): number {
  const p = places * normalTail(local);
  if (p >= 0.5) return 0;
  if (p > 1e-12) return 0 - normalQuantile(p);
  return Math.sqrt(Math.max(0, local * local - 2 * Math.log(places)));
}
