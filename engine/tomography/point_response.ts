import type { MapPlace } from "./axisymmetric_part.ts";
import { blendProjector } from "./blend_projector.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type Inversion, type InversionRecipe, makeInverter } from "./invert_trail.ts";
import { mapStep } from "./map_shape.ts";

/** How an inversion shows a point source at a place. */
export interface PointResponse extends MapPlace {
  /** Full width at half maximum along the longer axis, km/s. */
  readonly major_fwhm_kms: number;
  /** Full width at half maximum along the shorter axis, km/s. */
  readonly minor_fwhm_kms: number;
  /** Direction of the longer axis, degrees from +Vx towards +Vy, in (−90, 90]. */
  readonly tilt_deg: number;
  /** Offset of the response's centroid from the source, km/s. */
  readonly offset_kms: number;
  /** Flux of the response within twice its half-maximum outline's extent over that of the source. */
  readonly recovered_flux: number;
}

/** Options of {@linkcode pointResponses}. */
export interface PointResponseOptions {
  /** How the map is made; for entropy and variation with the multiplier or weight held. */
  readonly recipe: InversionRecipe;
  /** The inversion of the trail by that recipe. */
  readonly found: Inversion;
  /** Where to put sources. */
  readonly places: readonly MapPlace[];
  /**
   * Flux of a source over that of the map.
   *
   * @default {0.02}
   */
  readonly strength?: number;
}

/**
 * Local resolution of an inversion, for this sampling and this noise: a weak point source is added to the
 * map's own data, the inversion is run again, and the difference is measured. Methods that are not
 * linear resolve bright places better than dark ones, so the answer depends on the map.
 *
 * @param trail Exposures, data, errors.
 * @param options Recipe, map, places.
 * @returns One response per place.
 *
 * @example
 * ```ts
 * import { pointResponses, makeInverter, makeProjector } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const count = 40, bins = 81;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 40)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 61, half_width_kms: 600, systemic_kms: 0 };
 * const flux = makeProjector(sampling, shape).forward(new Float64Array(61 * 61).fill(1e-5));
 * const trail = { sampling, flux, error: flux.map(() => 1e-3) };
 * const recipe = { inversion: "back-projection", ...shape, wiener: false } as const;
 * const [found] = pointResponses(trail, {
 *   recipe,
 *   found: makeInverter(trail, recipe)(trail),
 *   places: [{ vx_kms: 200, vy_kms: -100 }],
 * });
 * // The profile's own width, FWHM 94 km/s, and a little for the grid that back-projection works on.
 * assertAlmostEquals(found?.major_fwhm_kms ?? NaN, 100, 8);
 * ```
 */
export function pointResponses(
  trail: TrailSamples,
  options: PointResponseOptions,
): PointResponse[] {
  const { recipe, found, places, strength = 0.02 } = options;
  const { pixels, half_width_kms } = recipe;
  const step = mapStep(recipe);
  const members = "blends" in recipe ? recipe.blends ?? [] : [];
  const projector = blendProjector(trail.sampling, { ...recipe, members });
  const invert = makeInverter(trail, recipe);
  const clean = projector.forward(found.map.intensity).slice();
  const sum = found.map.intensity.reduce((a, b) => a + b, 0);
  const sign = "absorption" in recipe && recipe.absorption === true ? -1 : 1;
  const run = (data: Float64Array) => invert({ ...trail, flux: data.map((f) => sign * f) }).map;
  const before = run(clean).intensity;
  return places.map((place) => {
    const column = Math.round((place.vx_kms + half_width_kms) / step);
    const row = Math.round((place.vy_kms + half_width_kms) / step);
    const source = new Float64Array(pixels * pixels);
    source[row * pixels + column] = strength * sum;
    const seen = projector.forward(source);
    const after = run(clean.map((f, k) => f + seen[k]!)).intensity;
    const response = after.map((f, k) => f - before[k]!);
    return {
      ...place,
      ...measured(response, { pixels, step, column, row, flux: strength * sum }),
    };
  });
}

function measured(
  response: Float64Array,
  { pixels, step, column, row, flux }: {
    readonly pixels: number;
    readonly step: number;
    readonly column: number;
    readonly row: number;
    readonly flux: number;
  },
): Omit<PointResponse, keyof MapPlace> {
  let peak = row * pixels + column;
  // The response may peak a few pixels off.
  for (let y = row - 3; y <= row + 3; y++) {
    for (let x = column - 3; x <= column + 3; x++) {
      const k = y * pixels + x;
      if (x >= 0 && x < pixels && response[k] !== undefined && response[k]! > response[peak]!) {
        peak = k;
      }
    }
  }
  const half = 0.5 * response[peak]!;
  const seen = new Set([peak]), queue = [peak];
  let count = 0, sx = 0, sy = 0, sxx = 0, sxy = 0, syy = 0;
  for (let k = queue.pop(); k !== undefined; k = queue.pop()) {
    const x = k % pixels, y = Math.floor(k / pixels);
    count++;
    sx += x;
    sy += y;
    sxx += x * x;
    sxy += x * y;
    syy += y * y;
    for (const [i, j] of [[x - 1, y], [x + 1, y], [x, y - 1], [x, y + 1]] as const) {
      const next = j * pixels + i;
      if (i < 0 || j < 0 || i >= pixels || j >= pixels || seen.has(next)) continue;
      if (!(response[next]! > half)) continue;
      seen.add(next);
      queue.push(next);
    }
  }
  const cx = sx / count, cy = sy / count;
  // A uniform ellipse of semi-axis a has variance a²/4 along it; each pixel adds its own 1/12.
  const xx = sxx / count - cx * cx + 1 / 12, yy = syy / count - cy * cy + 1 / 12;
  const xy = sxy / count - cx * cy;
  const mean = 0.5 * (xx + yy), apart = Math.hypot(0.5 * (xx - yy), xy);
  const major = 4 * Math.sqrt(mean + apart) * step;
  const minor = 4 * Math.sqrt(Math.max(mean - apart, 1 / 12)) * step;
  const reach = major / step;
  let inside = 0;
  response.forEach((f, k) => {
    if (Math.hypot(k % pixels - cx, Math.floor(k / pixels) - cy) <= reach) inside += f;
  });
  return {
    major_fwhm_kms: major,
    minor_fwhm_kms: minor,
    tilt_deg: 0.5 * Math.atan2(2 * xy, xx - yy) * 180 / Math.PI,
    offset_kms: Math.hypot(cx - column, cy - row) * step,
    recovered_flux: inside / flux,
  };
}
