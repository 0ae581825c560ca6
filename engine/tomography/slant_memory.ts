import type { ProjectorPrecision } from "./projector.ts";
import { SLANT_KERNEL_BYTES } from "./slant_kernel_bytes.ts";
import type { SlantPlan } from "./slant_plan.ts";

/** Zeros on either side of a map line, and lines or instants per pass: as in slant_kernel.as. */
export const LINE_PAD = 16;
const GROUP = 4;

/** What the kernel offers; `plan` is the address of its Plan. */
export interface KernelExports {
  /** Map to samples, double precision. */
  readonly forward64: (plan: number) => void;
  /** Samples to map, double precision. */
  readonly adjoint64: (plan: number) => void;
  /** Map to samples, single precision. */
  readonly forward32: (plan: number) => void;
  /** Samples to map, single precision. */
  readonly adjoint32: (plan: number) => void;
  /** Interpolated profiles to map, double precision. */
  readonly gatherProfiles64: GatherProfiles;
  /** Interpolated profiles to map, single precision. */
  readonly gatherProfiles32: GatherProfiles;
}

type GatherProfiles = (
  plan: number,
  columns: number,
  positions: number,
  rises: number,
) => void;

let compiled: WebAssembly.Module | null | undefined;

/** The compiled kernel; null where WebAssembly SIMD is missing. */
export function kernelModule(): WebAssembly.Module | null {
  if (compiled === undefined) {
    const bytes = Uint8Array.from(atob(SLANT_KERNEL_BYTES), (c) => c.charCodeAt(0));
    compiled = typeof WebAssembly === "object" && WebAssembly.validate(bytes)
      ? new WebAssembly.Module(bytes)
      : null;
  }
  return compiled;
}

/**
 * Starts the kernel on a memory.
 *
 * @param memory The memory, from {@linkcode slantMemory}.
 * @returns The kernel's functions, or null where WebAssembly SIMD is missing.
 */
export function startKernel(memory: WebAssembly.Memory): KernelExports | null {
  const module = kernelModule();
  if (module === null) return null;
  return new WebAssembly.Instance(module, { env: { memory } })
    .exports as unknown as KernelExports;
}

/** Lines of a map in the kernel's memory. */
export type Lines = Float64Array | Float32Array;

/** Where things are in the kernel's memory. */
export interface SlantMemory {
  readonly memory: WebAssembly.Memory;
  /** Address of the kernel's Plan. */
  readonly header: number;
  /** Samples. */
  readonly data: Float64Array;
  /** One flag per instant: zero where it is to be passed over. */
  readonly wanted: Int32Array;
  /** Rows of the map with zeros around. */
  readonly rows: Lines;
  /** Columns of the map with zeros around. */
  readonly columns: Lines;
  /** Addresses of the further vectors asked for. */
  readonly further: readonly number[];
  /** From line to line, values. */
  readonly stride: number;
}

/**
 * Writes a plan into a memory of its own, in the order of the kernel's class Plan.
 *
 * @param plan The plan.
 * @param options Number of samples, number format of the map, further vectors to write.
 * @returns Where things are.
 */
export function slantMemory(
  plan: SlantPlan,
  options: {
    readonly sample_count: number;
    readonly precision: ProjectorPrecision;
    readonly further?: readonly Float64Array[];
  },
): SlantMemory {
  const { pixels, over, strand_length, instants } = plan;
  const { further = [] } = options;
  const bytes = options.precision === "double" ? 8 : 4;
  const stride = 4 * Math.ceil((pixels + 2 * LINE_PAD) / 4);
  const FIELDS = 26, SLACK = 64;
  let top = 4 * FIELDS;
  const reserve = (size: number) => {
    const at = 16 * Math.ceil(top / 16);
    top = at + size + SLACK;
    return at;
  };
  const integers = [plan.axis, plan.tap_start, plan.entry_start, plan.sample, plan.first] as const;
  const doubles = [plan.u0, plan.du, plan.taps, plan.scale, plan.ratio] as const;
  const [axis, tap_start, entry_start, sample, first] = integers.map((a) => reserve(a.byteLength));
  const [u0, du, taps, scale, ratio] = doubles.map((a) => reserve(a.byteLength));
  const wanted = reserve(4 * instants);
  const data = reserve(8 * options.sample_count);
  const rows = reserve(bytes * pixels * stride), columns = reserve(bytes * pixels * stride);
  const strands = bytes * GROUP * over * strand_length;
  const sum = reserve(strands), part = reserve(strands);
  const whole = reserve(8 * (over * strand_length + 2));
  const strand = reserve(4 * GROUP * pixels), at = reserve(4 * GROUP * pixels);
  const offset = reserve(8 * GROUP * pixels), order = reserve(4 * pixels);

  const extra = further.map((a) => reserve(a.byteLength));

  const memory = new WebAssembly.Memory({ initial: Math.ceil(top / 65536) });
  const { buffer } = memory;
  const inner = bytes * LINE_PAD;
  new Int32Array(buffer, 0, FIELDS).set([
    pixels,
    stride,
    over,
    strand_length,
    instants,
    ...[
      axis,
      wanted,
      u0,
      du,
      tap_start,
      taps,
      entry_start,
      sample,
      first,
      scale,
      ratio,
    ] as number[],
    ...[data, rows + inner, columns + inner, sum, part, whole, strand, at, offset, order],
  ]);
  integers.forEach((a, i) =>
    new Int32Array(buffer, [axis, tap_start, entry_start, sample, first][i], a.length).set(a)
  );
  doubles.forEach((a, i) =>
    new Float64Array(buffer, [u0, du, taps, scale, ratio][i], a.length).set(a)
  );
  further.forEach((a, i) => new Float64Array(buffer, extra[i], a.length).set(a));
  const lines = (from: number): Lines =>
    bytes === 8
      ? new Float64Array(buffer, from, pixels * stride)
      : new Float32Array(buffer, from, pixels * stride);
  return {
    memory,
    header: 0,
    data: new Float64Array(buffer, data, options.sample_count),
    wanted: new Int32Array(buffer, wanted, instants),
    rows: lines(rows),
    columns: lines(columns),
    further: extra,
    stride,
  };
}

const BLOCK = 16;

/**
 * Writes a map into the kernel's memory, rows as they are and columns as lines.
 *
 * @param map The map, pixels².
 * @param memory The memory.
 * @param pixels Pixels along a side.
 */
export function writeLines(
  map: Float64Array,
  { rows, columns, stride }: Pick<SlantMemory, "rows" | "columns" | "stride">,
  pixels: number,
): void {
  for (let r = 0; r < pixels; r++) {
    rows.set(map.subarray(r * pixels, (r + 1) * pixels), r * stride + LINE_PAD);
  }
  for (let r0 = 0; r0 < pixels; r0 += BLOCK) {
    const r1 = Math.min(pixels, r0 + BLOCK);
    for (let c = 0; c < pixels; c++) {
      const to = c * stride + LINE_PAD;
      for (let r = r0; r < r1; r++) columns[to + r] = map[r * pixels + c]!;
    }
  }
}

/**
 * Reads a map out of the kernel's memory: the sum of rows and columns.
 *
 * @param memory The memory.
 * @param into Receives the map, pixels².
 * @param pixels Pixels along a side.
 */
export function joinLines(
  { rows, columns, stride }: Pick<SlantMemory, "rows" | "columns" | "stride">,
  into: Float64Array,
  pixels: number,
): void {
  for (let r0 = 0; r0 < pixels; r0 += BLOCK) {
    const r1 = Math.min(pixels, r0 + BLOCK);
    for (let c = 0; c < pixels; c++) {
      const from = c * stride + LINE_PAD;
      for (let r = r0; r < r1; r++) {
        into[r * pixels + c] = rows[r * stride + LINE_PAD + c]! + columns[from + r]!;
      }
    }
  }
}
