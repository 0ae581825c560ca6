import type { Sampling } from "../trail/mod.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Projector, ProjectorOptions } from "./projector.ts";
import { type SlantPlan, slantPlan, wantedInstants } from "./slant_plan.ts";

/**
 * The projector along slanted lines in plain TypeScript: see {@linkcode SlantPlan} for the idea.
 *
 * @param sampling The exposures.
 * @param options Map's size and the systemic velocity, already checked.
 * @returns The operator.
 *
 * @example
 * ```ts
 * import { slantProjector } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0.1),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(100),
 * };
 * const projector = slantProjector(sampling, { pixels: 3, half_width_kms: 100, systemic_kms: 0 });
 * const [peak = NaN] = projector.forward(Float64Array.of(0, 0, 0, 0, 1, 0, 0, 0, 0));
 * assertAlmostEquals(peak, 1e4 / (Math.sqrt(2 * Math.PI) * 100), 0.1);
 * ```
 */
export function slantProjector(sampling: Sampling, options: ProjectorOptions): Projector {
  const { pixels, half_width_kms, systemic_kms } = options;
  const plan = slantPlan(sampling, options);
  const grid = makeGrid(plan);
  const sample_count = sampling.velocity_kms.length;
  const turned = new Float64Array(pixels * pixels);
  const wanting = (flags: Int32Array): LinearOperator => ({
    image_size: pixels * pixels,
    sample_count,
    forward(map, into = new Float64Array(sample_count)) {
      into.fill(0);
      transpose(map, turned, pixels);
      for (let t = 0; t < plan.instants; t++) {
        if (flags[t] === 0) continue;
        deposit(plan.axis[t] === 1 ? turned : map, plan, t, grid);
        blur(plan, t, grid.whole, into);
      }
      return into;
    },
    adjoint(data, into = new Float64Array(pixels * pixels)) {
      into.fill(0);
      turned.fill(0);
      for (let t = 0; t < plan.instants; t++) {
        if (flags[t] === 0) continue;
        spread(plan, t, data, grid);
        gather(plan.axis[t] === 1 ? turned : into, plan, t, grid);
      }
      addTransposed(turned, into, pixels);
      return into;
    },
  });
  return {
    ...wanting(new Int32Array(plan.instants).fill(1)),
    sparing: (weight) => wanting(wantedInstants(plan, { sampling, weight })),
    pixels,
    half_width_kms,
    systemic_kms,
    sampling,
    code: "plain",
  };
}

/** Scratch of one instant. */
interface Grid {
  /** Strands: sums of f going down, values of the grid going up. */
  readonly sum: Float64Array;
  /** Strands: sums of p f going down, differences to the next grid point going up. */
  readonly part: Float64Array;
  /** The grid in order. */
  readonly whole: Float64Array;
}

function makeGrid(plan: SlantPlan): Grid {
  const length = plan.over * plan.strand_length;
  return {
    sum: new Float64Array(length),
    part: new Float64Array(length),
    whole: new Float64Array(length + 1),
  };
}

/**
 * A pixel at fractional offset p puts (1 − p) f on one grid point and p f on the next. Sums of f and
 * of p f for each strand are enough, and cost one product a pixel.
 */
function deposit(lines: Float64Array, plan: SlantPlan, t: number, grid: Grid): void {
  const { pixels, over, strand_length } = plan;
  const { sum, part, whole } = grid;
  sum.fill(0);
  part.fill(0);
  const u0 = plan.u0[t]!, du = plan.du[t]!;
  for (let line = 0; line < pixels; line++) {
    const u = u0 + line * du;
    const start = Math.floor(u);
    const p = u - start;
    const turn = Math.floor(start / over);
    const at = (start - turn * over) * strand_length + turn, from = line * pixels;
    for (let j = 0; j < pixels; j++) {
      const f = lines[from + j]!;
      sum[at + j] = sum[at + j]! + f;
      part[at + j] = part[at + j]! + p * f;
    }
  }
  let carried = 0;
  for (let k = 0, n = 0; k < strand_length; k++) {
    for (let i = k; n < (k + 1) * over; i += strand_length, n++) {
      whole[n] = (sum[i]! - part[i]!) + carried;
      carried = part[i]!;
    }
  }
}

/** Adds one instant's blurred grid to the samples. Two partial sums, as a SIMD lane pair makes them. */
function blur(plan: SlantPlan, t: number, whole: Float64Array, into: Float64Array): void {
  const { taps, first, scale, ratio } = plan;
  const tap_from = plan.tap_start[t]!, tap_to = plan.tap_start[t + 1]!;
  const from = plan.entry_start[t]!, to = plan.entry_start[t + 1]!;
  const sample = plan.sample[t]! - from;
  for (let s = from; s < to; s++) {
    const r = ratio[s]!;
    const rr = r * r;
    let even = 0, odd = 0, p = 1, q = r, n = first[s]!;
    for (let j = tap_from; j < tap_to; j += 2, n += 2) {
      even += (taps[j]! * p) * whole[n]!;
      odd += (taps[j + 1]! * q) * whole[n + 1]!;
      p *= rr;
      q *= rr;
    }
    into[sample + s] = into[sample + s]! + (even + odd) * scale[s]!;
  }
}

/** The transpose of `blur`, then the strands that `gather` reads. */
function spread(plan: SlantPlan, t: number, data: Float64Array, grid: Grid): void {
  const { taps, first, scale, ratio, over, strand_length } = plan;
  const { sum, part, whole } = grid;
  whole.fill(0);
  const tap_from = plan.tap_start[t]!, tap_to = plan.tap_start[t + 1]!;
  const from = plan.entry_start[t]!, to = plan.entry_start[t + 1]!;
  const sample = plan.sample[t]! - from;
  for (let s = from; s < to; s++) {
    const r = ratio[s]!;
    const rr = r * r, d = data[sample + s]! * scale[s]!;
    let p = 1, q = r, n = first[s]!;
    for (let j = tap_from; j < tap_to; j += 2, n += 2) {
      whole[n] = whole[n]! + (taps[j]! * p) * d;
      whole[n + 1] = whole[n + 1]! + (taps[j + 1]! * q) * d;
      p *= rr;
      q *= rr;
    }
  }
  for (let k = 0, n = 0; k < strand_length; k++) {
    for (let i = k; n < (k + 1) * over; i += strand_length, n++) {
      sum[i] = whole[n]!;
      part[i] = whole[n + 1]! - whole[n]!;
    }
  }
}

/** The transpose of `deposit`. */
function gather(lines: Float64Array, plan: SlantPlan, t: number, grid: Grid): void {
  const { pixels, over, strand_length } = plan;
  const { sum, part } = grid;
  const u0 = plan.u0[t]!, du = plan.du[t]!;
  for (let line = 0; line < pixels; line++) {
    const u = u0 + line * du;
    const start = Math.floor(u);
    const p = u - start;
    const turn = Math.floor(start / over);
    const at = (start - turn * over) * strand_length + turn, from = line * pixels;
    for (let j = 0; j < pixels; j++) {
      lines[from + j] = lines[from + j]! + (sum[at + j]! + p * part[at + j]!);
    }
  }
}

const BLOCK = 16;

function transpose(map: Float64Array, into: Float64Array, n: number): void {
  for (let r0 = 0; r0 < n; r0 += BLOCK) {
    const r1 = Math.min(n, r0 + BLOCK);
    for (let c = 0; c < n; c++) {
      for (let r = r0; r < r1; r++) into[c * n + r] = map[r * n + c]!;
    }
  }
}

function addTransposed(turned: Float64Array, into: Float64Array, n: number): void {
  for (let r0 = 0; r0 < n; r0 += BLOCK) {
    const r1 = Math.min(n, r0 + BLOCK);
    for (let c = 0; c < n; c++) {
      for (let r = r0; r < r1; r++) into[r * n + c] = into[r * n + c]! + turned[c * n + r]!;
    }
  }
}
