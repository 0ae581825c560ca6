import { chiSquareTail } from "../numerics/mod.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import type { TrailSamples } from "./check_trail.ts";
import { antisymmetricCells } from "./mirror_test.ts";
import type { ModulatedMap } from "./modulated_map.ts";
import { makeProjector } from "./projector.ts";

/** A round region of the map. */
export interface MapRegion extends MapPlace {
  /** Radius, km/s. */
  readonly radius_kms: number;
}

/** How the emission of a region varies on the orbit. */
export interface RegionModulation {
  /** Amplitude over the average, of the flux in the region, from the maps. */
  readonly amplitude: number;
  /** Phase of greatest brightness, cycles. */
  readonly phase: number;
  /** Amplitude by least squares on the part of the data that no fixed map makes. */
  readonly fitted_amplitude: number;
  /** Its error, one standard deviation along the amplitude. */
  readonly fitted_error: number;
  /** Probability of so good a fit without modulation in the region; null with too few pairs. */
  readonly p_value: number | null;
}

/** Options of {@linkcode modulationIn}. */
export interface ModulationInOptions {
  /** The maps. */
  readonly maps: ModulatedMap;
  /** The region. */
  readonly region: MapRegion;
  /** Systemic velocity γ that the maps were made with, km/s. */
  readonly systemic_kms: number;
}

/**
 * Modulation of a region: its flux-weighted amplitude and phase in the maps, and how significant it is on
 * the part of the data that is antisymmetric under (v, φ) → (−v, φ + ½), which fixed emission does not
 * reach. There the region's average emission times cos 2πφ and sin 2πφ is fitted by least squares.
 *
 * @param trail Exposures, data, errors.
 * @param options Maps, region, systemic velocity.
 * @returns Amplitude, phase, significance.
 *
 * @example
 * ```ts
 * import { modulationIn } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(modulationIn.length, 2);
 * ```
 */
export function modulationIn(trail: TrailSamples, options: ModulationInOptions): RegionModulation {
  const { maps, region, systemic_kms } = options;
  const { average, cosine, sine } = maps;
  const { pixels, half_width_kms } = average;
  const step = 2 * half_width_kms / (pixels - 1);
  let flux = 0, c = 0, s = 0;
  const inside = average.intensity.map((f, k) => {
    const vx = (k % pixels) * step - half_width_kms;
    const vy = Math.floor(k / pixels) * step - half_width_kms;
    if (Math.hypot(vx - region.vx_kms, vy - region.vy_kms) > region.radius_kms) return 0;
    flux += f;
    c += cosine.intensity[k]!;
    s += sine.intensity[k]!;
    return f;
  });
  const turns = Math.atan2(s, c) / (2 * Math.PI);
  const projector = makeProjector(trail.sampling, { ...average, systemic_kms });
  const fitted = fitOnAntisymmetric(trail, {
    fixed: projector.forward(average.intensity),
    seen: projector.forward(inside),
    half_range_kms: half_width_kms,
    systemic_kms,
  });
  return {
    amplitude: flux > 0 ? Math.hypot(c, s) / flux : 0,
    phase: turns - Math.floor(turns),
    ...fitted,
  };
}

function fitOnAntisymmetric(
  trail: TrailSamples,
  options: {
    /** Data of the average map: what its binning does not make symmetric goes with it. */
    readonly fixed: Float64Array;
    /** Data of the region's average emission. */
    readonly seen: Float64Array;
    readonly half_range_kms: number;
    readonly systemic_kms: number;
  },
): Pick<RegionModulation, "fitted_amplitude" | "fitted_error" | "p_value"> {
  const { sampling } = trail;
  const waved = (wave: (angle: number) => number) => {
    const out = new Float64Array(options.seen.length);
    for (let i = 0; i < sampling.count; i++) {
      const factor = wave(2 * Math.PI * sampling.phase[i]!);
      for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
        out[k] = factor * options.seen[k]!;
      }
    }
    return out;
  };
  const cells = (flux: Float64Array, model: Float64Array) =>
    antisymmetricCells({ ...trail, flux }, { ...options, model });
  const none = new Float64Array(options.seen.length);
  const data = cells(trail.flux, options.fixed);
  if (data === null) return { fitted_amplitude: 0, fitted_error: Infinity, p_value: null };
  const x = cells(waved(Math.cos), none)!, y = cells(waved(Math.sin), none)!;
  let xx = 0, xy = 0, yy = 0, dx = 0, dy = 0;
  data.variance.forEach((variance, i) => {
    if (!(variance < Infinity)) return;
    const a = x.value[i]!, b = y.value[i]!, d = data.value[i]!;
    xx += a * a / variance;
    xy += a * b / variance;
    yy += b * b / variance;
    dx += a * d / variance;
    dy += b * d / variance;
  });
  const determinant = xx * yy - xy * xy;
  if (!(determinant > 0)) return { fitted_amplitude: 0, fitted_error: Infinity, p_value: null };
  const c = (yy * dx - xy * dy) / determinant, s = (xx * dy - xy * dx) / determinant;
  const amplitude = Math.hypot(c, s);
  const along = amplitude > 0 ? [c / amplitude, s / amplitude] as const : [1, 0] as const;
  const variance = (along[0] ** 2 * yy - 2 * along[0] * along[1] * xy + along[1] ** 2 * xx) /
    determinant;
  return {
    fitted_amplitude: amplitude,
    fitted_error: Math.sqrt(variance),
    p_value: chiSquareTail(c * dx + s * dy, 2),
  };
}
