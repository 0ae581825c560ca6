import type { Sampling } from "../trail/mod.ts";
import { mapStep } from "./map_shape.ts";
import type { ProjectorOptions } from "./projector.ts";
import { type SlantGeometry, slantGeometry } from "./slant_geometry.ts";
import { smearingRule } from "./smearing.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";

/** Grid points per σ that keep a point source within 1 % of the exact profile and a map within 1e-4. */
const POINTS_PER_SIGMA = 3;

/** The Gaussian is cut at this many σ: 7e-6 of its area lies beyond. */
const REACH = 4.5;

/**
 * The numbers that the slanted projection runs on, in flat arrays that TypeScript and WebAssembly
 * share.
 *
 * At an instant of phase φ, where |sin 2πφ| ≥ |cos 2πφ| work goes along the map's columns
 * (`axis` 1), elsewhere along its rows (`axis` 0): from pixel to pixel along such a line the
 * velocity advances by a fixed amount of at least 0.7 map steps. On a grid `over` times finer than
 * that, pixel j of line l sits at `u0 + l × du + over × j`, so a whole line shares one fractional
 * offset. The grid is kept as `over` strands of `strand_length` values, strand s holding grid
 * points s, s + over, s + 2 over…: a line lands contiguously on one strand and its right neighbour.
 * The grid's Gaussian blur to the samples has the profile's variance less what the linear deposit
 * adds by itself: p (1 − p) grid steps squared for a fractional offset p, averaged over the lines.
 *
 * The weight of grid point `first[s] + j` in table entry s is
 * `scale[s] × ratio[s]^j × taps[j]`: exp(−(x − j)²/2σ²) taken apart, two exponentials a sample.
 */
export interface SlantPlan {
  /** Pixels along a line, and number of lines. */
  readonly pixels: number;
  /** Number of instants, T. */
  readonly instants: number;
  /** Grid points per pixel along a line, and number of strands. */
  readonly over: number;
  /** Length of each strand. */
  readonly strand_length: number;
  /** Exposure that each instant belongs to, T values. */
  readonly exposure: Int32Array;
  /** Line direction, T values: 0 rows (Vx runs along a line), 1 columns (Vy runs). */
  readonly axis: Int32Array;
  /** Grid position of pixel 0 of line 0, T values. */
  readonly u0: Float64Array;
  /** Change of grid position from line to line, T values, between −`over` and `over`. */
  readonly du: Float64Array;
  /** Offset of each instant's taps, T + 1 values; every instant has an even number of them. */
  readonly tap_start: Int32Array;
  /** The part of the weight that depends on j alone. */
  readonly taps: Float64Array;
  /** Offset of each instant's table entries, T + 1 values. */
  readonly entry_start: Int32Array;
  /** Sample that the instant's first entry belongs to, T values; the others follow. */
  readonly sample: Int32Array;
  /** Grid point of the entry's first tap. */
  readonly first: Int32Array;
  /** Weight of the first tap over `taps[0]`; holds pixel area, profile norm and smearing weight. */
  readonly scale: Float64Array;
  /** Growth of the weight from tap to tap over that of `taps`. */
  readonly ratio: Float64Array;
}

/**
 * Lays out a slanted projection.
 *
 * @param sampling The exposures.
 * @param options Map's size and the systemic velocity.
 * @returns The plan.
 *
 * @example
 * ```ts
 * import { slantPlan } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0.25),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(40),
 * };
 * const plan = slantPlan(sampling, { pixels: 41, half_width_kms: 400, systemic_kms: 0 });
 * assertEquals([...plan.axis], [1]);
 * ```
 */
export function slantPlan(sampling: Sampling, options: ProjectorOptions): SlantPlan {
  const { pixels, half_width_kms, systemic_kms, rest_ratio = 1 } = options;
  const shift = systemFrame(systemic_kms, { rest_ratio });
  const velocity = shiftVelocities(sampling.velocity_kms, shift);
  const step = mapStep(options);
  const moments = instantsOf(sampling, half_width_kms);
  const instants = moments.length;
  const over = oversampling(sampling, step);

  const blurs = moments.map((m) => {
    const line = slantGeometry(m.phase, { ...options, over, margin: 0 });
    const { grid_step_kms } = line;
    const sigma = (sampling.profile_sigma_kms[m.exposure] ?? NaN) * shift.factor;
    const narrowed = Math.sqrt(sigma ** 2 - depositVariance(line, pixels) * grid_step_kms ** 2);
    return { narrowed, half: Math.ceil(REACH * narrowed / Math.abs(grid_step_kms)) };
  });
  const margin = 2 * blurs.reduce((most, b) => Math.max(most, b.half), 0) + 3;

  const axis = new Int32Array(instants);
  const u0 = new Float64Array(instants), du = new Float64Array(instants);
  const tap_start = new Int32Array(instants + 1), entry_start = new Int32Array(instants + 1);
  const sample = new Int32Array(instants);
  const taps: number[] = [];
  const first: number[] = [], scale: number[] = [], ratio: number[] = [];
  let top = 0;
  moments.forEach((m, t) => {
    const line = slantGeometry(m.phase, { ...options, over, margin });
    const { grid_step_kms, zero_kms, last } = line;
    axis[t] = line.axis;
    u0[t] = line.u0;
    du[t] = line.du;
    top = Math.max(top, last);

    const { narrowed, half } = blurs[t]!;
    const a = 0.5 * (grid_step_kms / narrowed) ** 2;
    for (let j = -half; j <= half; j++) taps.push(Math.exp(-a * j * j));
    taps.push(0);
    tap_start[t + 1] = taps.length;

    const norm = m.weight * step * step / (Math.sqrt(2 * Math.PI) * narrowed);
    const from = sampling.start[m.exposure] ?? 0, to = sampling.start[m.exposure + 1] ?? 0;
    const low = margin - half, high = Math.ceil(last) + half;
    let begun = false;
    for (let k = from; k < to; k++) {
      const u = (velocity[k]! - zero_kms) / grid_step_kms;
      const centre = Math.round(u);
      if (centre < low || centre > high) continue;
      if (!begun) sample[t] = k;
      begun = true;
      const x = u - centre;
      first.push(centre - half);
      scale.push(norm * Math.exp(-a * x * (x + 2 * half)));
      ratio.push(Math.exp(2 * a * x));
    }
    entry_start[t + 1] = first.length;
  });
  return {
    pixels,
    instants,
    over,
    strand_length: Math.ceil((Math.ceil(top) + 2 * margin + 4) / over),
    exposure: Int32Array.from(moments, (m) => m.exposure),
    axis,
    u0,
    du,
    tap_start,
    taps: Float64Array.from(taps),
    entry_start,
    sample,
    first: Int32Array.from(first),
    scale: Float64Array.from(scale),
    ratio: Float64Array.from(ratio),
  };
}

function depositVariance(line: SlantGeometry, pixels: number): number {
  let sum = 0;
  for (let l = 0; l < pixels; l++) {
    const u = line.u0 + l * line.du;
    const p = u - Math.floor(u);
    sum += p * (1 - p);
  }
  return sum / pixels;
}

function oversampling(sampling: Sampling, step: number): number {
  const sharpest = sampling.profile_sigma_kms.reduce((a, b) => Math.min(a, b), Infinity);
  return Math.min(4, Math.max(2, Math.ceil(POINTS_PER_SIGMA * step / sharpest)));
}

interface Instant {
  readonly exposure: number;
  readonly phase: number;
  readonly weight: number;
}

function instantsOf(sampling: Sampling, half_width_kms: number): Instant[] {
  const instants: Instant[] = [];
  for (let exposure = 0; exposure < sampling.count; exposure++) {
    const width = sampling.phase_width[exposure] ?? 0;
    const smear = 2 * Math.PI * width * half_width_kms /
      (sampling.profile_sigma_kms[exposure] ?? 1);
    const { offset, weight } = smearingRule(width, smear);
    offset.forEach((o, q) => {
      instants.push({ exposure, phase: (sampling.phase[exposure] ?? 0) + o, weight: weight[q]! });
    });
  }
  return instants;
}

/**
 * Tells which instants matter when samples have these weights.
 *
 * @param plan The plan.
 * @param options Sampling and weights of its samples.
 * @returns One value per instant: 0 where all weights of its exposure are zero, 1 elsewhere.
 *
 * @example
 * ```ts
 * import { slantPlan, wantedInstants } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 2,
 *   phase: Float64Array.of(0.25, 0.5),
 *   cycle: Float64Array.of(0, 0),
 *   phase_width: Float64Array.of(0, 0),
 *   start: Uint32Array.of(0, 1, 2),
 *   velocity_kms: Float64Array.of(0, 0),
 *   pixel_kms: Float64Array.of(20, 20),
 *   profile_sigma_kms: Float64Array.of(40, 40),
 * };
 * const plan = slantPlan(sampling, { pixels: 41, half_width_kms: 400, systemic_kms: 0 });
 * assertEquals([...wantedInstants(plan, { sampling, weight: Float64Array.of(0, 3) })], [0, 1]);
 * ```
 */
export function wantedInstants(
  plan: SlantPlan,
  options: { readonly sampling: Sampling; readonly weight: Float64Array },
): Int32Array {
  const { sampling: { start }, weight } = options;
  return plan.exposure.map((i) => {
    for (let k = start[i]!; k < start[i + 1]!; k++) if (weight[k]! > 0) return 1;
    return 0;
  });
}
