import type { Sampling } from "../trail/mod.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Projector, ProjectorOptions, ProjectorPrecision } from "./projector.ts";
import { SLANT_KERNEL_BYTES } from "./slant_kernel_bytes.ts";
import { type SlantPlan, slantPlan, wantedInstants } from "./slant_plan.ts";

/** Zeros on either side of a map line, and lines or instants per pass: as in slant_kernel.as. */
const PAD = 16, GROUP = 4;

interface KernelExports {
  readonly forward64: (plan: number) => void;
  readonly adjoint64: (plan: number) => void;
  readonly forward32: (plan: number) => void;
  readonly adjoint32: (plan: number) => void;
}

let compiled: WebAssembly.Module | null | undefined;

function kernelModule(): WebAssembly.Module | null {
  if (compiled === undefined) {
    const bytes = Uint8Array.from(atob(SLANT_KERNEL_BYTES), (c) => c.charCodeAt(0));
    compiled = typeof WebAssembly === "object" && WebAssembly.validate(bytes)
      ? new WebAssembly.Module(bytes)
      : null;
  }
  return compiled;
}

/**
 * Whether this machine can run the WebAssembly kernel (it needs 128-bit SIMD). Where it cannot, the
 * same arithmetic runs in TypeScript.
 *
 * @returns True when the kernel runs.
 *
 * @example
 * ```ts
 * import { kernelAvailable } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * assert(kernelAvailable());
 * ```
 */
export function kernelAvailable(): boolean {
  return kernelModule() !== null;
}

/**
 * The projector along slanted lines in WebAssembly with SIMD. In double precision its results are
 * those of {@linkcode slantProjector} to the bit: same arithmetic in the same order.
 *
 * @param sampling The exposures.
 * @param options Map's size and the systemic velocity, already checked; precision.
 * @returns The operator, or null where WebAssembly SIMD is missing.
 *
 * @example
 * ```ts
 * import { kernelProjector } from "@millrace/millrace/tomography";
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
 * const projector = kernelProjector(sampling, { pixels: 3, half_width_kms: 100, systemic_kms: 0 });
 * const [peak = NaN] = projector?.forward(Float64Array.of(0, 0, 0, 0, 1, 0, 0, 0, 0)) ?? [];
 * assertAlmostEquals(peak, 1e4 / (Math.sqrt(2 * Math.PI) * 100), 0.1);
 * ```
 */
export function kernelProjector(sampling: Sampling, options: ProjectorOptions): Projector | null {
  const module = kernelModule();
  if (module === null) return null;
  const { pixels, half_width_kms, systemic_kms, precision = "double" } = options;
  const sample_count = sampling.velocity_kms.length;
  const plan = slantPlan(sampling, options);
  const { memory, header, data, wanted, rows, columns, stride } = layOut(plan, {
    sample_count,
    precision,
  });
  const instance = new WebAssembly.Instance(module, { env: { memory } });
  const run = instance.exports as unknown as KernelExports;
  const [down, up] = precision === "double"
    ? [run.forward64, run.adjoint64]
    : [run.forward32, run.adjoint32];
  const all = new Int32Array(plan.instants).fill(1);
  const wanting = (flags: Int32Array): LinearOperator => ({
    image_size: pixels * pixels,
    sample_count,
    forward(map, into = new Float64Array(sample_count)) {
      for (let r = 0; r < pixels; r++) {
        rows.set(map.subarray(r * pixels, (r + 1) * pixels), r * stride + PAD);
      }
      turn(map, columns, { pixels, stride });
      data.fill(0);
      wanted.set(flags);
      down(header);
      into.set(data);
      return into;
    },
    adjoint(samples, into = new Float64Array(pixels * pixels)) {
      data.set(samples);
      rows.fill(0);
      columns.fill(0);
      wanted.set(flags);
      up(header);
      join(rows, columns, { into, pixels, stride });
      // The forward direction counts on zeros around the lines.
      rows.fill(0);
      columns.fill(0);
      return into;
    },
  });
  return {
    ...wanting(all),
    sparing: (weight) => wanting(wantedInstants(plan, { sampling, weight })),
    pixels,
    half_width_kms,
    systemic_kms,
    sampling,
    code: "kernel",
  };
}

type Lines = Float64Array | Float32Array;

interface Layout {
  readonly memory: WebAssembly.Memory;
  /** Address of the kernel's Plan. */
  readonly header: number;
  readonly data: Float64Array;
  readonly wanted: Int32Array;
  readonly rows: Lines;
  readonly columns: Lines;
  /** From line to line, values. */
  readonly stride: number;
}

/** Writes the plan into a memory of its own, in the order of the kernel's class Plan. */
function layOut(
  plan: SlantPlan,
  options: { readonly sample_count: number; readonly precision: ProjectorPrecision },
): Layout {
  const { pixels, over, strand_length, instants } = plan;
  const bytes = options.precision === "double" ? 8 : 4;
  const stride = 4 * Math.ceil((pixels + 2 * PAD) / 4);
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

  const memory = new WebAssembly.Memory({ initial: Math.ceil(top / 65536) });
  const { buffer } = memory;
  const inner = bytes * PAD;
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
    stride,
  };
}

const BLOCK = 16;

function turn(
  map: Float64Array,
  into: Lines,
  { pixels, stride }: { readonly pixels: number; readonly stride: number },
): void {
  for (let r0 = 0; r0 < pixels; r0 += BLOCK) {
    const r1 = Math.min(pixels, r0 + BLOCK);
    for (let c = 0; c < pixels; c++) {
      const to = c * stride + PAD;
      for (let r = r0; r < r1; r++) into[to + r] = map[r * pixels + c]!;
    }
  }
}

/** Adds columns to rows, without the zeros around them. */
function join(
  rows: Lines,
  columns: Lines,
  { into, pixels, stride }: {
    readonly into: Float64Array;
    readonly pixels: number;
    readonly stride: number;
  },
): void {
  for (let r0 = 0; r0 < pixels; r0 += BLOCK) {
    const r1 = Math.min(pixels, r0 + BLOCK);
    for (let c = 0; c < pixels; c++) {
      const from = c * stride + PAD;
      for (let r = r0; r < r1; r++) {
        into[r * pixels + c] = rows[r * stride + PAD + c]! + columns[from + r]!;
      }
    }
  }
}
