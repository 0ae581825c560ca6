import type { VelocityMap } from "../../tomography/mod.ts";

/** A place in a velocity map. */
export interface MapCentre {
  /** Vx, km/s. */
  readonly vx_kms: number;
  /** Vy, km/s. */
  readonly vy_kms: number;
}

/** Mean intensity of a map along one coordinate. */
export interface MapProfile {
  /** Speed about the centre in km/s, or azimuth in degrees; N values. */
  readonly x: Float64Array;
  /** Mean intensity, N values; NaN where there is no pixel. */
  readonly mean: Float64Array;
  /** Standard deviation of the pixels about it, N values. */
  readonly spread: Float64Array;
}

/** How a profile of a map is taken. */
export interface MapProfileOptions {
  /** Centre: the accretor. @default {{ vx_kms: 0, vy_kms: 0 }} */
  readonly centre?: MapCentre;
  /** Number of bins. @default {half the map's pixels for speed, 72 for azimuth} */
  readonly bins?: number;
  /** Speeds about the centre between which an azimuth profile is taken, km/s. @default {[0, Infinity]} */
  readonly speeds_kms?: readonly [from: number, to: number];
}

/**
 * Mean intensity against the speed about a centre.
 *
 * @param map The map.
 * @param options Centre and bins.
 * @returns The profile from 0 to the map's half-width.
 *
 * @example
 * ```ts
 * import { radialProfile } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 5, half_width_kms: 200, intensity: new Float64Array(25).fill(3) };
 * assertEquals([...radialProfile(map).mean], [3, 3]);
 * ```
 */
export function radialProfile(map: VelocityMap, options: MapProfileOptions = {}): MapProfile {
  const { bins = Math.floor(map.pixels / 2) } = options;
  const width = map.half_width_kms / bins;
  return profile(map, options, {
    bins,
    x: (i) => (i + 0.5) * width,
    bin: (speed) => Math.floor(speed / width),
  });
}

/**
 * Mean intensity against azimuth about a centre: 0° towards +Vx, 90° towards +Vy.
 *
 * @param map The map.
 * @param options Centre, bins, range of speeds.
 * @returns The profile from −180° to 180°.
 *
 * @example
 * ```ts
 * import { azimuthProfile } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const intensity = new Float64Array(25);
 * intensity[4 * 5 + 2] = 1; // above the middle
 * const { x, mean } = azimuthProfile({ pixels: 5, half_width_kms: 200, intensity }, { bins: 4 });
 * assert(mean[3]! > 0 && x[3] === 135); // 90° is the lower edge of the bin from 90° to 180°
 * ```
 */
export function azimuthProfile(map: VelocityMap, options: MapProfileOptions = {}): MapProfile {
  const { bins = 72, speeds_kms: [from, to] = [0, Infinity] } = options;
  const width = 360 / bins;
  return profile(map, options, {
    bins,
    x: (i) => -180 + (i + 0.5) * width,
    bin: (speed, azimuth_deg) => {
      // The centre has no azimuth; 180° is −180°.
      if (speed === 0 || speed < from || speed > to) return -1;
      return Math.min(bins - 1, Math.floor((azimuth_deg + 180) / width + 1e-9));
    },
  });
}

interface Bins {
  readonly bins: number;
  readonly x: (bin: number) => number;
  readonly bin: (speed_kms: number, azimuth_deg: number) => number;
}

function profile(map: VelocityMap, options: MapProfileOptions, { bins, x, bin }: Bins): MapProfile {
  const { pixels, half_width_kms, intensity } = map;
  const { centre = { vx_kms: 0, vy_kms: 0 } } = options;
  const step = 2 * half_width_kms / (pixels - 1);
  const count = new Float64Array(bins);
  const sum = new Float64Array(bins);
  const square = new Float64Array(bins);
  for (let row = 0; row < pixels; row++) {
    const vy = -half_width_kms + row * step - centre.vy_kms;
    for (let column = 0; column < pixels; column++) {
      const vx = -half_width_kms + column * step - centre.vx_kms;
      const i = bin(Math.hypot(vx, vy), Math.atan2(vy, vx) * 180 / Math.PI);
      const value = intensity[row * pixels + column]!;
      if (i < 0 || i >= bins || !Number.isFinite(value)) continue;
      count[i]!++;
      sum[i]! += value;
      square[i]! += value * value;
    }
  }
  const mean = sum.map((total, i) => total / count[i]!);
  return {
    x: Float64Array.from({ length: bins }, (_, i) => x(i)),
    mean,
    spread: square.map((total, i) => Math.sqrt(Math.max(0, total / count[i]! - mean[i]! ** 2))),
  };
}
