import { axisymmetricPart, type MapPlace } from "./axisymmetric_part.ts";
import { blurMap } from "./blur_map.ts";
import { mapStep } from "./map_shape.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A blob of an excess map. */
export interface ExcessBlob extends MapPlace {
  /** Flux of the blob over that of the whole map. */
  readonly flux_fraction: number;
}

/** Options of {@linkcode mapExcess}. */
export interface MapExcessOptions {
  /** Centre of symmetry. */
  readonly centre: MapPlace;
  /** Resolution (FWHM), km/s. */
  readonly resolution_kms: number;
  /**
   * A map that is taken off first, as of {@linkcode mapExplainer}: what sampling and inversion make alone.
   *
   * @default {null}
   */
  readonly alone?: VelocityMap | null;
}

/** What a map has over its axisymmetric part, smoothed to the resolution. */
export interface Excess {
  /** The excess, pixels². */
  readonly values: Float64Array;
  /** The pixel uphill of a given one, no further away than the resolution. */
  readonly climb: (from: number) => number;
  /** Centroid under a Gaussian window, and twice the flux above half the peak; null if not positive. */
  readonly blobAt: (peak: number) => ExcessBlob | null;
  /** The excess of the pixels that hang together with a peak and are higher than a share of it; zero elsewhere. */
  readonly regionAt: (peak: number, share: number) => Float64Array;
  /** Pixels higher than all their neighbours and than a share of the highest. */
  readonly peaks: (share: number) => number[];
}

/**
 * The excess of a map over the part that is axisymmetric about a centre, with the means to measure
 * its blobs. The place is the centroid under a Gaussian window as wide as a point source looks; the
 * flux above half the peak, doubled, is the flux of a Gaussian.
 *
 * @param map The map.
 * @param options Centre of symmetry, resolution, what is taken off first.
 * @returns The excess.
 *
 * @example
 * ```ts
 * import { mapExcess } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const intensity = Float64Array.from({ length: 81 * 81 }, (_, k) => {
 *   const vx = (k % 81) * 10 - 400, vy = Math.floor(k / 81) * 10 - 400;
 *   return 1 + Math.exp(-((vx + 150) ** 2 + (vy - 80) ** 2) / (2 * 40 ** 2));
 * });
 * const excess = mapExcess({ pixels: 81, half_width_kms: 400, intensity }, {
 *   centre: { vx_kms: 0, vy_kms: 0 },
 *   resolution_kms: 50,
 * });
 * const [peak = -1] = excess.peaks(0.5);
 * assertAlmostEquals(excess.blobAt(peak)?.vx_kms ?? NaN, -150, 1);
 * ```
 */
export function mapExcess(
  map: VelocityMap,
  options: MapExcessOptions,
): Excess {
  const { centre, resolution_kms, alone = null } = options;
  const { pixels } = map;
  const beyond = alone === null
    ? map
    : { ...map, intensity: map.intensity.map((f, k) => f - alone.intensity[k]!) };
  const round = axisymmetricPart(beyond, { centre }).intensity;
  const values = blurMap(beyond.intensity.map((f, k) => f - round[k]!), {
    ...map,
    fwhm_kms: resolution_kms,
  });
  const total = map.intensity.reduce((a, b) => a + b, 0);
  const steps = Math.ceil(resolution_kms / mapStep(map));
  return {
    values,
    climb(from) {
      let k = from;
      for (let i = 0; i < steps; i++) {
        const next = uphill(values, k, pixels);
        if (next === k) break;
        k = next;
      }
      return k;
    },
    blobAt: (peak) => blobAround(values, peak, { map, total, resolution_kms }),
    regionAt(peak, share) {
      const region = new Float64Array(values.length);
      for (const k of connectedAbove(values, { peak, level: share * values[peak]!, pixels })) {
        region[k] = values[k]!;
      }
      return region;
    },
    peaks(share) {
      const floor = share * values.reduce((a, b) => Math.max(a, b), 0);
      const found: number[] = [];
      for (let row = 1; row < pixels - 1; row++) {
        for (let column = 1; column < pixels - 1; column++) {
          const k = row * pixels + column;
          if (values[k]! > floor && uphill(values, k, pixels) === k) found.push(k);
        }
      }
      return found;
    },
  };
}

function uphill(values: Float64Array, k: number, pixels: number): number {
  let best = k;
  for (const j of [-pixels - 1, -pixels, -pixels + 1, -1, 1, pixels - 1, pixels, pixels + 1]) {
    const value = values[k + j];
    if (value !== undefined && value > values[best]!) best = k + j;
  }
  return best;
}

function blobAround(
  values: Float64Array,
  peak: number,
  { map, total, resolution_kms }: {
    readonly map: VelocityMap;
    readonly total: number;
    readonly resolution_kms: number;
  },
): ExcessBlob | null {
  const { pixels, half_width_kms } = map;
  const step = mapStep(map);
  const half = 0.5 * values[peak]!;
  if (!(half > 0)) return null;
  let weight = 0, x = 0, y = 0, sum = 0;
  for (const k of connectedAbove(values, { peak, level: half, pixels })) {
    const column = k % pixels, row = (k - column) / pixels;
    const w = values[k]! - half;
    weight += w;
    x += w * column;
    y += w * row;
    sum += values[k]!;
  }
  const centre = windowedCentre(values, { x: x / weight, y: y / weight }, {
    pixels,
    sigma: resolution_kms / Math.sqrt(8 * Math.LN2) / step,
  });
  return {
    vx_kms: centre.x * step - half_width_kms,
    vy_kms: centre.y * step - half_width_kms,
    flux_fraction: total > 0 ? 2 * sum / total : 0,
  };
}

/** The pixels above a level that hang together with a peak, the peak first. */
function connectedAbove(
  values: Float64Array,
  { peak, level, pixels }: {
    readonly peak: number;
    readonly level: number;
    readonly pixels: number;
  },
): Set<number> {
  const seen = new Set([peak]);
  for (const k of seen) {
    const column = k % pixels, row = (k - column) / pixels;
    const around = [
      column > 0 ? k - 1 : -1,
      column < pixels - 1 ? k + 1 : -1,
      row > 0 ? k - pixels : -1,
      row < pixels - 1 ? k + pixels : -1,
    ];
    // Growing while it is walked through: what is added is visited, too.
    for (const j of around) if (j >= 0 && values[j]! > level) seen.add(j);
  }
  return seen;
}

/** Rounds of the centroid, and how far each goes beyond the windowed mean: the window halves it. */
const ROUNDS = 12, BEYOND = 1.5;

/**
 * Centroid under a round Gaussian window that is moved to it: unlike one within an outline, it does
 * not feel how pixels fall. Where the window leaves the blob the first guess stays.
 */
function windowedCentre(
  values: Float64Array,
  guess: { readonly x: number; readonly y: number },
  { pixels, sigma }: { readonly pixels: number; readonly sigma: number },
): { x: number; y: number } {
  const width = Math.SQRT2 * Math.max(sigma, 1);
  let { x, y } = guess;
  for (let round = 0; round < ROUNDS; round++) {
    const reach = Math.ceil(3.5 * width);
    let sum = 0, sx = 0, sy = 0;
    for (let r = Math.max(0, Math.round(y) - reach); r <= Math.min(pixels - 1, y + reach); r++) {
      for (let c = Math.max(0, Math.round(x) - reach); c <= Math.min(pixels - 1, x + reach); c++) {
        const square = (c - x) ** 2 + (r - y) ** 2;
        const f = values[r * pixels + c]! * Math.exp(-0.5 * square / (width * width));
        sum += f;
        sx += f * (c - x);
        sy += f * (r - y);
      }
    }
    if (!(sum > 0)) return guess;
    x += BEYOND * sx / sum;
    y += BEYOND * sy / sum;
    if (Math.hypot(x - guess.x, y - guess.y) > 1.5 * width) return guess;
  }
  return { x, y };
}
