import { InputError } from "../errors.ts";
import { gatherLines, type PhasedRows } from "./gather_lines.ts";
import { halfOrbitIntervals } from "./half_orbit.ts";
import { checkMapShape, mapStep } from "./map_shape.ts";
import { filterSpectra, type ProfileRows, profileSpectra } from "./profile_filter.ts";
import type { ProjectorMethod, ProjectorPrecision } from "./projector.ts";
import { systemFrame } from "./system_frame.ts";
import { type ProfileGrid, uniformProfiles } from "./uniform_profiles.ts";
import type { VelocityMap } from "./velocity_map.ts";
import { wienerGain } from "./wiener_gain.ts";

/** Options of {@linkcode backProject}. */
export interface BackProjectionOptions {
  /** Pixels along each side of the map, odd. */
  readonly pixels: number;
  /** Velocity of the centre of the outermost pixel, km/s. */
  readonly half_width_kms: number;
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /**
   * Whether to hold back the frequencies that are mostly noise.
   *
   * @default {true}
   */
  readonly wiener?: boolean;
  /**
   * The trail, on the same grid and with the same errors, whose noise decides which frequencies are
   * held back: what a filter made for one trail does to another.
   *
   * @default The trail itself
   */
  readonly filter_of?: { readonly grid: ProfileGrid };
  /**
   * Full width at half maximum of a Gaussian that the map is smoothed by, km/s.
   *
   * @default {0}
   */
  readonly roll_off_fwhm_kms?: number;
  /**
   * Largest phase interval that one exposure may stand for, over the median one.
   *
   * @default {2}
   */
  readonly interval_cap?: number;
  /**
   * Whether to leave out the corners, beyond the circle of the half-width.
   *
   * @default {false}
   */
  readonly circle?: boolean;
  /**
   * `reference` interpolates each filtered profile linearly at every pixel, by definition; `fast` and
   * `plain` interpolate by cubics on a grid finer than the map's pixels, along slanted lines.
   *
   * @default {"fast"}
   */
  readonly method?: ProjectorMethod;
  /**
   * Number format of the map where WebAssembly does the work.
   *
   * @default {"double"}
   */
  readonly precision?: ProjectorPrecision;
}

/**
 * Filtered back-projection of a trail: every profile is convolved with the ramp kernel and smeared
 * back over the map along its direction (Radon inversion; Kak & Slaney 1988, ch. 3). Exposures weigh
 * by the phase interval they stand for, modulo half an orbit and capped, times inverse variance;
 * the weights add up to one, so the flux is kept. Bins that were not covered are bridged linearly
 * within a profile and are zero beyond its ends. The instrumental profile stays in the map.
 *
 * @param trail A trail, of which the uniform grid is used.
 * @param options Map's size, systemic velocity, filter.
 * @returns The map; negative values are kept.
 * @throws {InputError} When no profile has a covered bin, or the map's shape is wrong.
 *
 * @example A source at the origin
 * ```ts
 * import { backProject } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const rows = 40, columns = 81, step_kms = 25, first_kms = -1000, sigma = 100;
 * const grid = {
 *   rows,
 *   columns,
 *   first_kms,
 *   step_kms,
 *   phase: Float64Array.from({ length: rows }, (_, i) => i / rows),
 *   flux: Float64Array.from({ length: rows * columns }, (_, k) => {
 *     const v = first_kms + (k % columns) * step_kms;
 *     return Math.exp(-0.5 * (v / sigma) ** 2) / (Math.sqrt(2 * Math.PI) * sigma);
 *   }),
 *   error: new Float64Array(rows * columns).fill(1e-6),
 * };
 * const map = backProject({ grid }, { pixels: 41, half_width_kms: 600, systemic_kms: 0 });
 * const peak = map.intensity[20 * 41 + 20] ?? NaN;
 * assertAlmostEquals(peak * 2 * Math.PI * sigma ** 2, 1, 0.02);
 * ```
 */
export function backProject(
  trail: { readonly grid: ProfileGrid },
  options: BackProjectionOptions,
): VelocityMap {
  const { pixels, half_width_kms, systemic_kms, circle = false, method = "fast" } = options;
  const { wiener = true, roll_off_fwhm_kms = 0, interval_cap = 2 } = options;
  checkMapShape(options);
  const { grid } = trail;
  const shift = systemFrame(systemic_kms);
  const step_kms = grid.step_kms * shift.factor;
  const first_kms = shift.offset_kms + shift.factor * grid.first_kms;
  const { flux, variance, covered } = uniformProfiles(grid);
  const intervals = halfOrbitIntervals(grid.phase, { cap: interval_cap });
  const weight = intervals.map((d, i) => covered[i] === 0 ? 0 : d / variance[i]!);
  const total = weight.reduce((a, b) => a + b, 0);
  if (!(total > 0)) {
    throw new InputError({
      action: "back-project trail",
      rule: "at least one exposure must have an unmasked bin with a positive error",
      value: grid.rows,
      unit: "exposures without",
    });
  }
  for (let i = 0; i < weight.length; i++) weight[i] = weight[i]! / total;

  const profiles: ProfileRows = { rows: grid.rows, columns: grid.columns, step_kms, flux };
  const spectra = profileSpectra(profiles);
  const judged = options.filter_of === undefined ? spectra : profileSpectra({
    ...profiles,
    flux: uniformProfiles(options.filter_of.grid).flux,
  });
  const hold = wiener
    ? wienerGain(judged, {
      weight,
      noise: variance.map((v) => v * grid.columns),
      diameter_kms: 2 * half_width_kms,
    })
    : () => 1;
  const roll = Math.PI * roll_off_fwhm_kms / Math.sqrt(8 * Math.LN2);
  const filtered = filterSpectra(spectra, {
    gain: (f) => hold(f) * Math.exp(-2 * (roll * f) ** 2),
    scale: weight.map((w) => Math.PI * w / step_kms),
  });
  const rows = { ...profiles, flux: filtered, first_kms, phase: grid.phase };
  const intensity = method === "reference"
    ? gatherPixels(rows, options)
    : gatherLines(rows, { ...options, plain: method === "plain" });
  if (circle) clearCorners(intensity, pixels);
  return { pixels, half_width_kms, intensity };
}

function gatherPixels(
  rows: PhasedRows,
  options: BackProjectionOptions,
): Float64Array {
  const { pixels, half_width_kms } = options;
  const { columns, first_kms, step_kms, flux, phase } = rows;
  const step = mapStep(options);
  const intensity = new Float64Array(pixels * pixels);
  for (let j = 0; j < rows.rows; j++) {
    const cos = Math.cos(2 * Math.PI * phase[j]!), sin = Math.sin(2 * Math.PI * phase[j]!);
    for (let iy = 0; iy < pixels; iy++) {
      const vy = iy * step - half_width_kms;
      for (let ix = 0; ix < pixels; ix++) {
        const vx = ix * step - half_width_kms;
        const at = (-vx * cos + vy * sin - first_kms) / step_kms;
        // A hair beyond either end is that end: the rounding of `at` is about 1e-13.
        const near = Math.abs(at - Math.round(at)) < 1e-9 ? Math.round(at) : at;
        if (near < 0 || near > columns - 1) continue;
        const k = Math.min(columns - 2, Math.floor(near));
        const p = near - k;
        const q = (1 - p) * flux[j * columns + k]! + p * flux[j * columns + k + 1]!;
        intensity[iy * pixels + ix] = intensity[iy * pixels + ix]! + q;
      }
    }
  }
  return intensity;
}

function clearCorners(intensity: Float64Array, pixels: number): void {
  const middle = (pixels - 1) / 2;
  for (let k = 0; k < intensity.length; k++) {
    const x = k % pixels - middle, y = Math.floor(k / pixels) - middle;
    if (x * x + y * y > middle * middle) intensity[k] = 0;
  }
}
