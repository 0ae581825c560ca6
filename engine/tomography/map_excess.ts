import { axisymmetricPart, type MapPlace } from "./axisymmetric_part.ts";
import { blurMap } from "./blur_map.ts";
import { mapStep } from "./map_shape.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A blob of an excess map. */
export interface ExcessBlob extends MapPlace {
  /** Flux of the blob over that of the whole map. */
  readonly flux_fraction: number;
}

/** What a map has over its axisymmetric part, smoothed to the resolution. */
export interface Excess {
  /** The excess, pixels². */
  readonly values: Float64Array;
  /** The pixel uphill of a given one, no further away than the resolution. */
  readonly climb: (from: number) => number;
  /** Centroid of what stands above half a peak, and twice the flux in there; null if not positive. */
  readonly blobAt: (peak: number) => ExcessBlob | null;
  /** Pixels higher than all their neighbours and than a share of the highest. */
  readonly peaks: (share: number) => number[];
}

/**
 * The excess of a map over the part that is axisymmetric about a centre, with the means to measure
 * its blobs. The flux above half the peak, doubled, is the flux of a Gaussian.
 *
 * @param map The map.
 * @param options Centre of symmetry, resolution (FWHM).
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
  options: { readonly centre: MapPlace; readonly resolution_kms: number },
): Excess {
  const { centre, resolution_kms } = options;
  const { pixels } = map;
  const round = axisymmetricPart(map, { centre }).intensity;
  const values = blurMap(map.intensity.map((f, k) => f - round[k]!), {
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
    blobAt: (peak) => blobAround(values, peak, { map, total }),
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
  { map, total }: { readonly map: VelocityMap; readonly total: number },
): ExcessBlob | null {
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
    vx_kms: x / weight * step - half_width_kms,
    vy_kms: y / weight * step - half_width_kms,
    flux_fraction: total > 0 ? 2 * sum / total : 0,
  };
}
