import { InputError } from "../errors.ts";
import type { VelocityMap } from "../tomography/mod.ts";

/** Centre of point symmetry of a velocity map's wings. */
export interface WingSymmetry {
  /** K1 = −Vy of the centre, km/s. */
  readonly k_accretor_kms: number;
  /** Vx of the centre, km/s: 0 when the phases are right and the disc is symmetric. */
  readonly vx_kms: number;
  /** Standard deviation of K1 over the resampled maps; null without them. */
  readonly k_accretor_error_kms: number | null;
  /** Standard deviation of Vx over the resampled maps; null without them. */
  readonly vx_error_kms: number | null;
  /** Σ (f(p) − f(2c − p))² / Σ (f(p) + f(2c − p))² about the centre: 0 when perfectly symmetric. */
  readonly asymmetry: number;
}

/** Options of {@linkcode wingSymmetry}. */
export interface WingSymmetryOptions {
  /** Speeds about the centre that count as wings, km/s. */
  readonly wing_kms: readonly [inner: number, outer: number];
  /** Maps of resampled data, for the errors. @default {[]} */
  readonly resampled?: readonly VelocityMap[];
}

/** Bilinear interpolation, 0 outside. */
function sampler(map: VelocityMap): (vx: number, vy: number) => number {
  const { pixels, half_width_kms, intensity } = map;
  const step = 2 * half_width_kms / (pixels - 1);
  return (vx, vy) => {
    const x = (vx + half_width_kms) / step, y = (vy + half_width_kms) / step;
    const i = Math.floor(x), j = Math.floor(y);
    if (i < 0 || j < 0 || i >= pixels - 1 || j >= pixels - 1) return 0;
    const s = x - i, t = y - j, at = j * pixels + i;
    return (1 - t) * ((1 - s) * intensity[at]! + s * intensity[at + 1]!) +
      t * ((1 - s) * intensity[at + pixels]! + s * intensity[at + pixels + 1]!);
  };
}

/** One place of each pair of opposite places in an annulus about (0, 0): x, y, stride 2. */
function halfAnnulus(inner: number, outer: number, step: number): Float64Array {
  const places: number[] = [];
  for (let r = inner; r <= outer; r += step) {
    const around = Math.max(8, Math.round(Math.PI * r / step));
    for (let k = 0; k < around; k++) {
      const angle = Math.PI * (k + 0.5) / around;
      places.push(r * Math.cos(angle), r * Math.sin(angle));
    }
  }
  return Float64Array.from(places);
}

/** Centre by Gauss–Newton steps on the differences of opposite places. */
function centreOf(map: VelocityMap, [inner, outer]: readonly [number, number]) {
  const step = 2 * map.half_width_kms / (map.pixels - 1);
  const at = sampler(map);
  const places = halfAnnulus(inner, outer, step);
  let x = 0, y = 0;
  for (let round = 0; round < 50; round++) {
    let xx = 0, xy = 0, yy = 0, xr = 0, yr = 0;
    for (let k = 0; k < places.length; k += 2) {
      const px = places[k]!, py = places[k + 1]!;
      const off = (cx: number, cy: number) => at(cx + px, cy + py) - at(cx - px, cy - py);
      const r = off(x, y);
      // Differences over a pixel either way: an interpolated map has corners.
      const dx = (off(x + step, y) - off(x - step, y)) / (2 * step);
      const dy = (off(x, y + step) - off(x, y - step)) / (2 * step);
      xx += dx * dx;
      xy += dx * dy;
      yy += dy * dy;
      xr += dx * r;
      yr += dy * r;
    }
    const determinant = xx * yy - xy * xy;
    if (!(determinant > 0)) break;
    const move_x = (xy * yr - yy * xr) / determinant, move_y = (xy * xr - xx * yr) / determinant;
    const length = Math.hypot(move_x, move_y);
    const limit = Math.min(1, inner / 2 / Math.max(length, 1e-300));
    x += limit * move_x;
    y += limit * move_y;
    if (length < 1e-4 * step) break;
  }
  let difference = 0, total = 0;
  for (let k = 0; k < places.length; k += 2) {
    const f = at(x + places[k]!, y + places[k + 1]!), g = at(x - places[k]!, y - places[k + 1]!);
    difference += (f - g) ** 2;
    total += (f + g) ** 2;
  }
  return { centre: [x, y] as const, asymmetry: total > 0 ? difference / total : 1 };
}

function deviation(values: readonly number[]): number | null {
  if (values.length < 2) return null;
  const mean = values.reduce((sum, v) => sum + v, 0) / values.length;
  return Math.sqrt(values.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (values.length - 1));
}

/**
 * K1 from a velocity map: the point about which the map's fast wings are most nearly
 * point-symmetric. A disc is symmetric about the accretor at (0, −K1), and spot, stream and donor
 * are slow; the inner limit of the wings must clear them.
 *
 * @param map The velocity map.
 * @param options Wings, and resampled maps for errors.
 * @returns K1, Vx and the remaining asymmetry.
 * @throws {InputError} When the wings are not a range inside the map.
 *
 * @example
 * ```ts
 * import { wingSymmetry } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const pixels = 101, half_width_kms = 2000;
 * const intensity = Float64Array.from({ length: pixels * pixels }, (_, n) => {
 *   const vx = 40 * (n % pixels - 50), vy = 40 * (Math.floor(n / pixels) - 50);
 *   return Math.exp(-Math.hypot(vx, vy + 80) / 400);
 * });
 * const found = wingSymmetry({ pixels, half_width_kms, intensity }, { wing_kms: [800, 1600] });
 * assertAlmostEquals(found.k_accretor_kms, 80, 1);
 * ```
 */
export function wingSymmetry(map: VelocityMap, options: WingSymmetryOptions): WingSymmetry {
  const { wing_kms, resampled = [] } = options;
  const [inner, outer] = wing_kms;
  if (!(inner > 0 && outer > inner && outer < map.half_width_kms)) {
    throw new InputError({
      action: "find centre of the map's wings",
      rule: `the wings must be a range of speeds inside the map's ${map.half_width_kms} km/s`,
      value: wing_kms,
      unit: "km/s",
      key: "wing_kms",
    });
  }
  const { centre, asymmetry } = centreOf(map, wing_kms);
  const others = resampled.map((one) => centreOf(one, wing_kms).centre);
  return {
    k_accretor_kms: 0 - centre[1],
    vx_kms: centre[0],
    k_accretor_error_kms: deviation(others.map((c) => c[1])),
    vx_error_kms: deviation(others.map((c) => c[0])),
    asymmetry,
  };
}
