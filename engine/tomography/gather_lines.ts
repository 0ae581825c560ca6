import { type MapShape, mapStep } from "./map_shape.ts";
import type { ProfileRows } from "./profile_filter.ts";
import type { ProjectorPrecision } from "./projector.ts";
import { slantGeometry } from "./slant_geometry.ts";
import { joinLines, slantMemory, startKernel } from "./slant_memory.ts";
import type { SlantPlan } from "./slant_plan.ts";

/** Profiles in the system's frame with their phases. */
export interface PhasedRows extends ProfileRows {
  /** Centre of the first bin, km/s. */
  readonly first_kms: number;
  /** Phase of each profile, cycles. */
  readonly phase: Float64Array;
}

/** Options of {@linkcode gatherLines}. */
export interface GatherOptions extends MapShape {
  /**
   * Number format of the map where WebAssembly does the work.
   *
   * @default {"double"}
   */
  readonly precision?: ProjectorPrecision;
  /**
   * Whether to work in TypeScript even where WebAssembly has SIMD.
   *
   * @default {false}
   */
  readonly plain?: boolean;
}

/** Grid points per pixel along a line. */
const OVER = 2;

/**
 * Sums profiles over a map, each smeared along its direction: the value of every profile at the
 * velocity of every pixel, interpolated by cubics onto a grid finer than the pixels and linearly
 * from there. In WebAssembly where it has SIMD, to the same bits in double precision.
 *
 * @param rows Profiles in the system's frame, with the velocity of their first bin and their phases.
 * @param options Map's shape, number format.
 * @returns Sums, pixels², rows of increasing Vy.
 *
 * @example A constant profile gives its value everywhere
 * ```ts
 * import { gatherLines } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const rows = {
 *   rows: 1,
 *   columns: 101,
 *   step_kms: 10,
 *   first_kms: -500,
 *   phase: Float64Array.of(0.2),
 *   flux: new Float64Array(101).fill(3),
 * };
 * const map = gatherLines(rows, { pixels: 5, half_width_kms: 100 });
 * assertAlmostEquals(map[7] ?? NaN, 3, 1e-12);
 * ```
 */
export function gatherLines(rows: PhasedRows, options: GatherOptions): Float64Array {
  const { pixels, precision = "double", plain = false } = options;
  const layout = layOut(rows, options);
  const out = new Float64Array(pixels * pixels);
  if (!plain) {
    const memory = slantMemory(layout.plan, {
      sample_count: rows.flux.length,
      precision,
      further: [layout.position, layout.rise],
    });
    const run = startKernel(memory.memory);
    if (run !== null) {
      memory.data.set(rows.flux);
      const [positions = 0, rises = 0] = memory.further;
      const gather = precision === "double" ? run.gatherProfiles64 : run.gatherProfiles32;
      gather(memory.header, rows.columns, positions, rises);
      joinLines(memory, out, pixels);
      return out;
    }
  }
  return gatherPlain(rows, { ...layout, out });
}

interface GatherLayout {
  readonly plan: SlantPlan;
  /** Bin of each instant's grid point 0. */
  readonly position: Float64Array;
  /** Bins from grid point to grid point. */
  readonly rise: Float64Array;
}

function layOut(rows: PhasedRows, shape: MapShape): GatherLayout {
  const { pixels } = shape;
  const count = rows.rows;
  const over = Math.min(4, Math.max(OVER, Math.ceil(mapStep(shape) / rows.step_kms)));
  const lines = Array.from(rows.phase, (p) => slantGeometry(p, { ...shape, over, margin: 1 }));
  const top = lines.reduce((most, line) => Math.max(most, line.last), 0);
  const none = new Int32Array(count + 1), empty = new Float64Array(0);
  return {
    plan: {
      pixels,
      instants: count,
      over,
      strand_length: Math.ceil((Math.ceil(top) + 3) / over) + 1,
      exposure: Int32Array.from({ length: count }, (_, i) => i),
      axis: Int32Array.from(lines, (line) => line.axis),
      u0: Float64Array.from(lines, (line) => line.u0),
      du: Float64Array.from(lines, (line) => line.du),
      ...{ tap_start: none, taps: empty, entry_start: none, sample: none, first: none },
      ...{ scale: empty, ratio: empty },
    },
    position: Float64Array.from(
      lines,
      (line) => (line.zero_kms - rows.first_kms) / rows.step_kms,
    ),
    rise: Float64Array.from(lines, (line) => line.grid_step_kms / rows.step_kms),
  };
}

function gatherPlain(
  rows: PhasedRows,
  { plan, position, rise, out }: GatherLayout & { readonly out: Float64Array },
): Float64Array {
  const { pixels, over, strand_length } = plan;
  const along = [new Float64Array(pixels * pixels), new Float64Array(pixels * pixels)] as const;
  const whole = new Float64Array(over * strand_length + 1);
  const value = new Float64Array(over * strand_length), step = new Float64Array(value.length);
  for (let t = 0; t < rows.rows; t++) {
    for (let n = 0; n < over * strand_length; n++) {
      whole[n] = interpolated(rows, t, position[t]! + n * rise[t]!);
    }
    for (let k = 0, n = 0; k < strand_length; k++) {
      for (let i = k; n < (k + 1) * over; i += strand_length, n++) {
        value[i] = whole[n]!;
        step[i] = whole[n + 1]! - whole[n]!;
      }
    }
    const map = along[plan.axis[t] === 1 ? 1 : 0];
    for (let l = 0; l < pixels; l++) {
      const u = plan.u0[t]! + l * plan.du[t]!;
      const start = Math.floor(u), p = u - start;
      const turn = Math.floor(start / over);
      const at = (start - turn * over) * strand_length + turn, from = l * pixels;
      for (let i = 0; i < pixels; i++) {
        map[from + i] = map[from + i]! + (value[at + i]! + p * step[at + i]!);
      }
    }
  }
  const [map, turned] = along;
  for (let k = 0; k < out.length; k++) {
    out[k] = map[k]! + turned[(k % pixels) * pixels + Math.floor(k / pixels)]!;
  }
  return out;
}

/** One profile between its bins: cubic Lagrange on the four bins around, zero outside. */
function interpolated({ columns, flux }: ProfileRows, row: number, at: number): number {
  const k = Math.floor(at), p = at - k, from = row * columns;
  if (k < -1 || k >= columns) return 0;
  const bin = (j: number) => j < 0 || j >= columns ? 0 : flux[from + j]!;
  const a = bin(k - 1), b = bin(k), c = bin(k + 1), d = bin(k + 2);
  const third = 1.5 * (b - c) + 0.5 * (d - a);
  return b + p * (0.5 * (c - a) + p * (a - 2.5 * b + 2 * c - 0.5 * d + p * third));
}
