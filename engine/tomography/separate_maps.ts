import { InputError, NotConverged, type Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import { freeBaselines } from "./baseline.ts";
import { checkTrail, type TrailSamples } from "./check_trail.ts";
import { type EntropyState, entropySteps } from "./entropy_solver.ts";
import { goalRaised } from "./goal_raised.ts";
import { lineLevel } from "./line_level.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Samples } from "./map_fit.ts";
import type { MaximumEntropyOptions } from "./maximum_entropy.ts";
import { priorImage } from "./prior_image.ts";
import { makeProjector, type ProjectorOptions } from "./projector.ts";
import type { VelocityMap } from "./velocity_map.ts";

/**
 * The operator of lines that overlap and have a map each: images one after another, their data added.
 *
 * @param sampling The exposures.
 * @param options Options of the projector, and each line's rest wavelength over the one that made
 * the velocities.
 * @returns The operator; its image holds the maps in the order of the ratios.
 *
 * @example
 * ```ts
 * import { separateProjector } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const shape = { pixels: 3, half_width_kms: 10, systemic_kms: 0 };
 * assertEquals(separateProjector(sampling, { ...shape, rest_ratios: [1, 1.001] }).image_size, 18);
 * ```
 */
export function separateProjector(
  sampling: Sampling,
  options: ProjectorOptions & { readonly rest_ratios: readonly number[] },
): LinearOperator {
  const { rest_ratios, pixels } = options;
  if (rest_ratios.length === 0) {
    throw new InputError({
      action: "make projector",
      rule: "there must be at least one line",
      value: 0,
      key: "lines",
    });
  }
  const lines = rest_ratios.map((rest_ratio) =>
    makeProjector(sampling, { ...options, rest_ratio })
  );
  const size = pixels * pixels, sample_count = sampling.velocity_kms.length;
  const together = (members: readonly LinearOperator[]): LinearOperator => {
    const part = new Float64Array(sample_count), image = new Float64Array(size);
    return {
      image_size: size * members.length,
      sample_count,
      forward(images, into = new Float64Array(sample_count)) {
        into.fill(0);
        members.forEach((line, m) => {
          line.forward(images.subarray(m * size, (m + 1) * size), part);
          for (let k = 0; k < sample_count; k++) into[k] = into[k]! + part[k]!;
        });
        return into;
      },
      adjoint(samples, into = new Float64Array(size * members.length)) {
        members.forEach((line, m) => into.set(line.adjoint(samples, image), m * size));
        return into;
      },
    };
  };
  return {
    ...together(lines),
    sparing: (weight) => together(lines.map((line) => line.sparing?.(weight) ?? line)),
  };
}

/** Maps of lines that overlap. */
export interface SeparateMaps {
  /** One map a line, in the order of the ratios. */
  readonly maps: readonly VelocityMap[];
  /** Data of all maps together; baselines taken out when they were free. */
  readonly model: Float64Array;
  /** Level of the uniform image. */
  readonly level: number;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Chi-square per sample aimed for: higher than asked for when it was raised; null with a fixed multiplier. */
  readonly goal: number | null;
  /** Half the squared difference of the unit gradients of entropy and chi-square. */
  readonly misalignment: number;
  /** Multiplier α of the objective χ² − α S. */
  readonly multiplier: number;
  /** Iterations. */
  readonly iterations: number;
  /** Whether it met its goals. */
  readonly converged: boolean;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** Options of {@linkcode separateMaps}. */
export interface SeparateMapsOptions extends
  Omit<
    MaximumEntropyOptions,
    "blends" | "start" | "projector" | "signed" | "absorption" | "inside_out"
  > {
  /** Each line's rest wavelength over the one that made the velocities. */
  readonly rest_ratios: readonly number[];
  /**
   * Maps to start from, one a line.
   *
   * @default {flat ones}
   */
  readonly starts?: readonly VelocityMap[];
  /**
   * The operator made before by {@linkcode separateProjector} for this sampling and these options.
   *
   * @default {made here}
   */
  readonly operator?: LinearOperator;
}

/** Share of the level that a starting map never falls below. */
const START_FLOOR = 0.05;

/**
 * Maximum-entropy maps of lines that overlap in the data, one map a line. Where two
 * lines overlap at all phases their axisymmetric parts trade against one another.
 *
 * @param trail Exposures, data, errors.
 * @param options Lines, and the options of a single map.
 * @returns The maps.
 * @throws {InputError} When the data cannot be mapped.
 * @throws {NotConverged} With the last maps when the goal is out of reach or iterations run out.
 *
 * @example
 * ```ts
 * import { separateMaps, separateProjector } from "@millrace/millrace/tomography";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const count = 16, bins = 91;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 35)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const options = {
 *   pixels: 21,
 *   half_width_kms: 400,
 *   systemic_kms: 0,
 *   rest_ratios: [1, 1 + 400 / 299792.458],
 * };
 * const blob = (x: number, y: number) =>
 *   Float64Array.from({ length: 441 }, (_, k) =>
 *     3e-4 * Math.exp(-0.5 * ((k % 21 - x) ** 2 + (Math.floor(k / 21) - y) ** 2) / 6)
 *   );
 * const truth = Float64Array.from([...blob(6, 12), ...blob(10, 15)]);
 * const random = randomStream(1);
 * const flux = separateProjector(sampling, options).forward(truth)
 *   .map((f) => f + 0.01 * random.normal());
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const found = separateMaps(trail, { ...options, reduced_chi_square: 1.05 });
 * assertAlmostEquals(found.reduced_chi_square, 1.05, 2e-3);
 * ```
 */
export function separateMaps(trail: TrailSamples, options: SeparateMapsOptions): SeparateMaps {
  const { pixels, half_width_kms, rest_ratios } = options;
  const warnings = checkTrail(trail, options);
  const { sampling, error } = trail;
  const flux = trail.flux.map((f, k) => error[k] === Infinity ? 0 : f);
  const shape = { pixels, half_width_kms }, size = pixels * pixels;
  const level = options.level ?? lineLevel({ sampling, flux, error }, options);
  const prior = priorImage(
    options.prior ?? {
      kind: "blurred",
      fwhm_kms: 3 * Math.sqrt(8 * Math.LN2) * median(sampling.profile_sigma_kms),
    },
    { ...shape, level },
  );
  const { starts, free_baselines = false } = options;
  let operator = options.operator ?? separateProjector(sampling, options);
  let samples: Samples = { flux, error };
  if (free_baselines) {
    ({ operator, samples } = freeBaselines(operator, { sampling, samples }));
  }
  const flat = level / rest_ratios.length;
  const start = new Float64Array(size * rest_ratios.length).fill(flat);
  starts?.forEach(({ intensity }, m) =>
    start.set(intensity.map((f) => Math.max(f, START_FLOOR * flat)), m * size)
  );
  const describe = (state: EntropyState): SeparateMaps => ({
    maps: rest_ratios.map((_, m) => ({
      ...shape,
      intensity: state.image.slice(m * size, (m + 1) * size),
    })),
    model: state.model,
    level,
    reduced_chi_square: state.reduced_chi_square,
    goal: state.goal,
    misalignment: state.misalignment,
    multiplier: state.multiplier,
    iterations: state.iterations,
    converged: state.converged,
    warnings: [...warnings, ...goalRaised(state.goal, options)],
  });
  try {
    let last: EntropyState | undefined;
    for (
      last of entropySteps({
        operator,
        samples,
        prior: (images) => {
          const out = new Float64Array(images.length);
          for (let m = 0; m < images.length; m += size) {
            out.set(prior(images.subarray(m, m + size)), m);
          }
          return out;
        },
        start,
      }, options)
    );
    return describe(last!);
  } catch (cause) {
    if (!(cause instanceof NotConverged)) throw cause;
    throw new NotConverged(cause.message, describe(cause.partial));
  }
}
