import type { Sampling } from "../trail/mod.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Projector, ProjectorOptions } from "./projector.ts";
import { joinLines, kernelModule, slantMemory, startKernel, writeLines } from "./slant_memory.ts";
import { slantPlan, wantedInstants } from "./slant_plan.ts";

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
  const { pixels, half_width_kms, systemic_kms, precision = "double" } = options;
  const sample_count = sampling.velocity_kms.length;
  const plan = slantPlan(sampling, options);
  const memory = slantMemory(plan, { sample_count, precision });
  const { header, data, wanted, rows, columns } = memory;
  const run = startKernel(memory.memory);
  if (run === null) return null;
  const [down, up] = precision === "double"
    ? [run.forward64, run.adjoint64]
    : [run.forward32, run.adjoint32];
  const all = new Int32Array(plan.instants).fill(1);
  const wanting = (flags: Int32Array): LinearOperator => ({
    image_size: pixels * pixels,
    sample_count,
    forward(map, into = new Float64Array(sample_count)) {
      writeLines(map, memory, pixels);
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
      joinLines(memory, into, pixels);
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
