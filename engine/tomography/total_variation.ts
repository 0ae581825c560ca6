import { NotConverged, type Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import { freeBaselines } from "./baseline.ts";
import { type BlendMember, blendProjector } from "./blend_projector.ts";
import { checkTrail, type TrailSamples } from "./check_trail.ts";
import type { LinearOperator } from "./linear_operator.ts";
import { backProjectedSamples, lineLevel } from "./line_level.ts";
import type { Samples } from "./map_fit.ts";
import { type MapShape, mapStep } from "./map_shape.ts";
import type { Projector, ProjectorMethod, ProjectorPrecision } from "./projector.ts";
import {
  type VariationOptions,
  type VariationState,
  variationSteps,
} from "./total_variation_solver.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** Options of {@linkcode totalVariation}. */
export interface TotalVariationOptions extends MapShape, VariationOptions {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /**
   * Typical intensity of the map, which gives the weight its meaning.
   *
   * @default {the data's mean flux spread evenly over the map}
   */
  readonly level?: number;
  /**
   * Map to start from; its positive part is used.
   *
   * @default {the filtered back-projection of the data}
   */
  readonly start?: VelocityMap;
  /**
   * Other members of a blend that share the map.
   *
   * @default {[]}
   */
  readonly blends?: readonly BlendMember[];
  /**
   * Whether each exposure's straight baseline is free.
   *
   * @default {false}
   */
  readonly free_baselines?: boolean;
  /**
   * Whether the line is in absorption: the data are inverted with their sign turned.
   *
   * @default {false}
   */
  readonly absorption?: boolean;
  /**
   * Whether to go on in spite of a large gap in phase.
   *
   * @default {false}
   */
  readonly force?: boolean;
  /**
   * How the projector works.
   *
   * @default {"fast"}
   */
  readonly method?: ProjectorMethod;
  /**
   * Number format of the projector.
   *
   * @default {"double"}
   */
  readonly precision?: ProjectorPrecision;
  /**
   * A projector made before by {@linkcode blendProjector} for this sampling and these options.
   *
   * @default {made here}
   */
  readonly projector?: Projector;
}

/** A total-variation map, or where it stands on its way. */
export interface VariationMap {
  /** The map; not negative, with the sign turned when the line was said to be in absorption. */
  readonly map: VelocityMap;
  /** Typical intensity that gives the weight its meaning. */
  readonly level: number;
  /** The map's data, sign as in the trail; baselines taken out when they were free. */
  readonly model: Float64Array;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Weight β of the objective ½χ² + β Σ |∇(f/level)|. */
  readonly weight: number;
  /** Σ |∇(f/level)| over pixels. */
  readonly variation: number;
  /** Relative change of the map over the last ten iterations. */
  readonly change: number;
  /** Iterations so far. */
  readonly iterations: number;
  /** Calls of the projector and its adjoint so far. */
  readonly operator_calls: number;
  /** Whether it met its goals. */
  readonly converged: boolean;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Total-variation map of a trail, step by step: the positive map of least Σ |∇f| (isotropic) for its
 * fit to the data. Edges stay sharp, noise between them is flattened. The solver is that of
 * {@linkcode variationSteps}.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, weight or goal.
 * @returns A generator of maps, one every ten iterations; the last one is the solution.
 * @throws {InputError} When the data cannot be mapped (see {@linkcode checkTrail}), or the line's mean
 * flux has the wrong sign.
 * @throws {NotConverged} With the last map when iterations run out or the goal is out of reach.
 *
 * @example
 * ```ts
 * import { makeProjector, totalVariationSteps } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 12, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 21, half_width_kms: 400, systemic_kms: 0 };
 * const truth = Float64Array.from({ length: 441 }, (_, k) =>
 *   Math.hypot(k % 21 - 6, Math.floor(k / 21) - 13) < 4 ? 0.02 : 0
 * );
 * const flux = makeProjector(sampling, shape).forward(truth).map((f, k) => f + 0.14 * Math.cos(k * k));
 * const trail = { sampling, flux, error: flux.map(() => 0.1) };
 * let last;
 * for (const state of totalVariationSteps(trail, shape)) last = state;
 * assert(last?.converged === true && last.reduced_chi_square < 1.2);
 * ```
 */
export function* totalVariationSteps(
  trail: TrailSamples,
  options: TotalVariationOptions,
): Generator<VariationMap, void, void> {
  const { pixels, half_width_kms } = options;
  const { blends = [], free_baselines = false, absorption = false } = options;
  const warnings = checkTrail(trail, options);
  const sign = absorption ? -1 : 1;
  const { sampling, error } = trail;
  const flux = trail.flux.map((f, k) => error[k] === Infinity ? 0 : sign * f);
  const shape = { pixels, half_width_kms };

  let operator: LinearOperator = options.projector ??
    blendProjector(sampling, { ...options, members: blends });
  let samples: Samples = { flux, error };
  if (free_baselines) {
    ({ operator, samples } = freeBaselines(operator, { sampling, samples }));
  }
  const turned = { sampling, flux, error };
  const level = options.level ?? lineLevel(turned, options);
  const start = options.start?.intensity ?? backProjectedSamples(turned, options);
  const steps = variationSteps({
    operator,
    samples,
    pixels,
    level,
    profile_pixels: median(sampling.profile_sigma_kms) / mapStep(options),
    start: start.map((f) => Math.max(0, f)),
  }, options);

  const describe = (state: VariationState): VariationMap => {
    const { image, model, ...numbers } = state;
    return {
      ...numbers,
      map: { ...shape, intensity: image },
      model: sign === 1 ? model : model.map((m) => -m),
      level,
      warnings,
    };
  };
  try {
    for (const state of steps) yield describe(state);
  } catch (cause) {
    if (!(cause instanceof NotConverged)) throw cause;
    throw new NotConverged(cause.message, describe(cause.partial));
  }
}

/**
 * Runs {@linkcode totalVariationSteps} to its end.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, weight or goal.
 * @returns The map with its fit to the data.
 * @throws {InputError} When the data cannot be mapped.
 * @throws {NotConverged} With the last map when iterations run out or the goal is out of reach.
 *
 * @example Iterations that run out are said
 * ```ts
 * import { totalVariation } from "@millrace/millrace/tomography";
 * import { NotConverged } from "@millrace/millrace/errors";
 * import { assertThrows } from "@std/assert";
 *
 * const count = 8, bins = 31;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 15)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const flux = Float64Array.from({ length: count * bins }, (_, k) => 0.1 + Math.cos(k * k));
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const options = { pixels: 21, half_width_kms: 200, systemic_kms: 0, max_iterations: 10 };
 * assertThrows(() => totalVariation(trail, options), NotConverged);
 * ```
 */
export function totalVariation(
  trail: TrailSamples,
  options: TotalVariationOptions,
): VariationMap {
  let last: VariationMap | undefined;
  for (const state of totalVariationSteps(trail, options)) last = state;
  return last!;
}
