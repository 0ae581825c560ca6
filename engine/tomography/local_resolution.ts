import { Matrix } from "ml-matrix";
import { solveLeastSquares } from "../numerics/mod.ts";
import { backProject, type BackProjectionOptions } from "./back_projection.ts";
import { mapStep } from "./map_shape.ts";
import { smearingRule } from "./smearing.ts";
import { systemFrame } from "./system_frame.ts";
import type { ProfileGrid } from "./uniform_profiles.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** How a point is seen at one place of a map: the ellipse of its half maximum. */
export interface LocalResolution {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** Full width at half maximum along the longer axis, km/s. */
  readonly major_kms: number;
  /** Full width at half maximum along the shorter axis, km/s. */
  readonly minor_kms: number;
  /** Angle of the longer axis from +Vx towards +Vy, degrees, in (−90, 90]. */
  readonly angle_deg: number;
}

/** Options of {@linkcode localResolution}. */
export interface LocalResolutionOptions
  extends Pick<BackProjectionOptions, "pixels" | "half_width_kms" | "systemic_kms" | "wiener"> {
  /** Standard deviation of the instrumental profile, km/s, one value per row of the grid. */
  readonly profile_sigma_kms: Float64Array;
  /**
   * Places, km/s.
   *
   * @default {The middle, six places at 0.4 and six at 0.75 of the half-width}
   */
  readonly places?: readonly { readonly vx_kms: number; readonly vy_kms: number }[];
}

/** Map pixels are made this many times finer, so that the half maximum holds enough of them. */
const FINER = 2;

/**
 * The resolution of a back-projected map, place by place: a point is seen at the phases, with the
 * smear and profile of the data, back-projected with the filter and the weights of the data, and
 * measured by the ellipse of its half maximum. Gas that moves fast is smeared along its circle; a stretch of the
 * orbit without exposures widens the point across the directions that are missing.
 *
 * @param grid The display grid of the trail; `phase_width` is each row's length, cycles.
 * @param options Size of the map, systemic velocity, profiles, places.
 * @returns One ellipse a place, in order; places whose response has no half maximum are left out.
 * @throws {InputError} When the grid holds nothing that can be back-projected.
 *
 * @example The middle of the map has the resolution of the instrument
 * ```ts
 * import { localResolution } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const rows = 40, columns = 121;
 * const grid = {
 *   rows, columns, first_kms: -1500, step_kms: 25,
 *   phase: Float64Array.from({ length: rows }, (_, i) => i / rows),
 *   phase_width: new Float64Array(rows),
 *   flux: new Float64Array(rows * columns),
 *   error: new Float64Array(rows * columns).fill(1),
 * };
 * const [middle] = localResolution(grid, {
 *   pixels: 61, half_width_kms: 1200, systemic_kms: 0, wiener: false,
 *   profile_sigma_kms: new Float64Array(rows).fill(60), places: [{ vx_kms: 0, vy_kms: 0 }],
 * });
 * assertAlmostEquals(middle!.major_kms / (2.3548 * 60), 1, 0.02);
 * ```
 */
export function localResolution(
  grid: ProfileGrid & { readonly phase_width: Float64Array },
  options: LocalResolutionOptions,
): LocalResolution[] {
  const { half_width_kms, places = defaultPlaces(half_width_kms) } = options;
  const shape = { ...options, pixels: FINER * (options.pixels - 1) + 1 };
  return places.flatMap((place) => {
    const point = { ...grid, flux: pointTrail({ grid, place, ...options }) };
    const response = backProject({ grid: point }, { ...shape, filter_of: { grid } });
    const ellipse = halfMaximum(response, place);
    return ellipse === null ? [] : [{ ...place, ...ellipse }];
  });
}

function defaultPlaces(half_width_kms: number): { vx_kms: number; vy_kms: number }[] {
  const ring = (part: number, turn: number) =>
    Array.from({ length: 6 }, (_, i) => {
      const angle = (i + turn) * Math.PI / 3;
      const speed = part * half_width_kms;
      return { vx_kms: speed * Math.cos(angle), vy_kms: speed * Math.sin(angle) };
    });
  return [{ vx_kms: 0, vy_kms: 0 }, ...ring(0.4, 0), ...ring(0.75, 0.5)];
}

/** The trail of a point of unit light, masked like the data. */
function pointTrail(
  options: LocalResolutionOptions & {
    readonly grid: ProfileGrid & { readonly phase_width: Float64Array };
    readonly place: { readonly vx_kms: number; readonly vy_kms: number };
  },
): Float64Array {
  const { grid, place: { vx_kms, vy_kms }, systemic_kms, profile_sigma_kms } = options;
  const flux = grid.flux.map((value) => Number.isNaN(value) ? NaN : 0);
  const frame = systemFrame(systemic_kms);
  const speed = Math.hypot(vx_kms, vy_kms);
  for (let row = 0; row < grid.rows; row++) {
    const sigma = frame.factor * profile_sigma_kms[row]!;
    const width = grid.phase_width[row]!;
    const { offset, weight } = smearingRule(width, 2 * Math.PI * width * speed / sigma);
    const peak = 1 / (Math.sqrt(2 * Math.PI) * sigma);
    for (let q = 0; q < offset.length; q++) {
      const angle = 2 * Math.PI * (grid.phase[row]! + offset[q]!);
      const centre = vy_kms * Math.sin(angle) - vx_kms * Math.cos(angle);
      for (let k = 0; k < grid.columns; k++) {
        const v = frame.offset_kms + frame.factor * (grid.first_kms + k * grid.step_kms);
        const z = (v - centre) / sigma;
        flux[row * grid.columns + k]! += weight[q]! * peak * Math.exp(-0.5 * z * z);
      }
    }
  }
  return flux;
}

/**
 * The ellipse of the half maximum about a place, from the curvature of the logarithm of what lies
 * above it; null where there is none.
 */
function halfMaximum(
  response: VelocityMap,
  place: { readonly vx_kms: number; readonly vy_kms: number },
): Omit<LocalResolution, "vx_kms" | "vy_kms"> | null {
  const { pixels, half_width_kms, intensity } = response;
  const step = mapStep(response);
  const column = Math.round((place.vx_kms + half_width_kms) / step);
  const row = Math.round((place.vy_kms + half_width_kms) / step);
  const top = intensity[row * pixels + column]!;
  if (!(top > 0)) return null;
  const above = connected(intensity, { pixels, start: row * pixels + column, least: top / 2 });
  if (above.length < 8) return null;
  const design = Matrix.zeros(above.length, 6);
  const data = new Float64Array(above.length);
  above.forEach((k, i) => {
    const x = k % pixels - column, y = Math.floor(k / pixels) - row;
    [1, x, y, x * x, x * y, y * y].forEach((value, j) => design.set(i, j, value));
    data[i] = Math.log(intensity[k]! / top);
  });
  const { parameters } = solveLeastSquares(design, data);
  const [xx, xy, yy] = [-2 * parameters[3]!, -parameters[4]!, -2 * parameters[5]!];
  const mean = (xx + yy) / 2, root = Math.hypot((xx - yy) / 2, xy);
  if (!(mean - root > 0)) return null;
  const width = (curvature: number) => step * Math.sqrt(8 * Math.LN2 / curvature);
  // The greater curvature is across; the longer axis stands at right angles to it.
  const across = Math.atan2(2 * xy, xx - yy) / 2 * 180 / Math.PI;
  return {
    major_kms: width(mean - root),
    minor_kms: width(mean + root),
    angle_deg: across > 0 ? across - 90 : across + 90,
  };
}

/** Pixels of at least a value that hang together with one of them. */
function connected(
  intensity: Float64Array,
  options: { readonly pixels: number; readonly start: number; readonly least: number },
): number[] {
  const { pixels, start, least } = options;
  const found = new Set([start]);
  for (const k of found) {
    const x = k % pixels;
    const near = [
      x > 0 ? k - 1 : -1,
      x < pixels - 1 ? k + 1 : -1,
      k - pixels,
      k + pixels,
    ];
    for (const next of near) if (intensity[next]! >= least) found.add(next);
  }
  return [...found];
}
