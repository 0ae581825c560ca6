import { NotConverged, type Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import { freeBaselines } from "./baseline.ts";
import { type BlendMember, blendProjector } from "./blend_projector.ts";
import { checkTrail, type TrailSamples } from "./check_trail.ts";
import { POSITIVE_ENTROPY, SIGNED_ENTROPY } from "./entropy_measure.ts";
import { type EntropyOptions, type EntropyState, entropySteps } from "./entropy_solver.ts";
import { goalRaised } from "./goal_raised.ts";
import { insideOutMap, insideOutOperator } from "./inside_out.ts";
import { backProjectedSamples, lineAmplitude, lineLevel } from "./line_level.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Samples } from "./map_fit.ts";
import type { MapShape } from "./map_shape.ts";
import { type PriorImage, priorImage } from "./prior_image.ts";
import { negativeFlux } from "./negative_flux.ts";
import type { Projector, ProjectorMethod, ProjectorPrecision } from "./projector.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** Options of {@linkcode maximumEntropy}. */
export interface MaximumEntropyOptions extends MapShape, EntropyOptions {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /**
   * The image that the map falls back on.
   *
   * @default {{ kind: "blurred", fwhm_kms: three times the resolution }; uniform for a signed map}
   */
  readonly prior?: PriorImage;
  /**
   * Level of the uniform image, normalised flux × km/s per (km/s)². For a signed map: how large values
   * are expected to be.
   *
   * @default {the data's mean flux spread evenly over the map; for a signed map their r.m.s. flux}
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
   * Whether the map may have either sign, for lines that are part emission and part absorption: the
   * entropy is then that of the difference of two positive maps, and zero is what it falls back on.
   *
   * @default {false}
   */
  readonly signed?: boolean;
  /**
   * Whether to solve for the map with its speeds turned inside out, so that the default image is smooth
   * there: it favours structure at high speeds. The map given is turned back. What lies beyond the
   * circle of the half-width stays empty.
   *
   * @default {false}
   */
  readonly inside_out?: boolean;
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

/** A maximum-entropy map, or where it stands on its way. */
export interface EntropyMap {
  /** The map; positive unless signed, with the sign turned when the line was said to be in absorption. */
  readonly map: VelocityMap;
  /** The default image that went with it; turned inside out when the solution was. */
  readonly prior: VelocityMap;
  /** Level of the uniform image. */
  readonly level: number;
  /** The map's data, sign as in the trail; baselines taken out when they were free. */
  readonly model: Float64Array;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Chi-square per sample aimed for: higher than asked for when it was raised; null with a fixed multiplier. */
  readonly goal: number | null;
  /** Half the squared difference of the unit gradients of entropy and chi-square, in the metric of the entropy. */
  readonly misalignment: number;
  /** Entropy relative to the default image. */
  readonly entropy: number;
  /** Multiplier α of the objective χ² − α S. */
  readonly multiplier: number;
  /** Iterations so far. */
  readonly iterations: number;
  /** Calls of the projector and its adjoint so far. */
  readonly operator_calls: number;
  /** Whether it met its goals. */
  readonly converged: boolean;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** Share of the level that the starting map never falls below. */
const START_FLOOR = 0.05;

/**
 * Maximum-entropy map of a trail, step by step (Marsh & Horne 1988, MNRAS 235, 269; control of
 * Skilling & Bryan 1984, MNRAS 211, 111): of all positive maps that fit the data to the wanted
 * chi-square, the one nearest to its default image.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, default image, goal.
 * @returns A generator of maps; the last one is the solution. The arrays of one that is not the last
 * change with the next step.
 * @throws {InputError} When the data cannot be mapped (see {@linkcode checkTrail}), or the line's mean
 * flux has the wrong sign.
 * @throws {NotConverged} With the last map when the goal is out of reach or iterations run out.
 *
 * @example
 * ```ts
 * import { makeProjector, maximumEntropySteps } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
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
 * const truth = new Float64Array(441);
 * truth[15 * 21 + 6] = 1;
 * const flux = makeProjector(sampling, shape).forward(truth).map((f, k) => f + 0.14 * Math.cos(k * k));
 * const trail = { sampling, flux, error: flux.map(() => 0.1) };
 * let last;
 * const options = { ...shape, reduced_chi_square: 1.1 };
 * for (const state of maximumEntropySteps(trail, options)) last = state;
 * assertAlmostEquals(last?.reduced_chi_square ?? NaN, 1.1, 2e-3);
 * ```
 */
export function* maximumEntropySteps(
  trail: TrailSamples,
  options: MaximumEntropyOptions,
): Generator<EntropyMap, void, void> {
  const { pixels, half_width_kms } = options;
  const { blends = [], free_baselines = false, absorption = false, signed = false } = options;
  const warnings = checkTrail(trail, options);
  const sign = absorption ? -1 : 1;
  const { sampling, error } = trail;
  const flux = trail.flux.map((f, k) => error[k] === Infinity ? 0 : sign * f);
  const shape = { pixels, half_width_kms };

  let operator: LinearOperator = options.projector ??
    blendProjector(sampling, { ...options, members: blends });
  if (options.inside_out === true) operator = insideOutOperator(operator, shape);
  let samples: Samples = { flux, error };
  if (free_baselines) {
    ({ operator, samples } = freeBaselines(operator, { sampling, samples }));
  }
  const turned = { sampling, flux, error };
  if (!signed) warnings.push(...negativeFlux(turned, options));
  const level = options.level ??
    (signed ? lineAmplitude(turned, options) : lineLevel(turned, options));
  const prior: PriorImage = options.prior ??
    (signed ? { kind: "uniform" } : {
      kind: "blurred",
      fwhm_kms: 3 * Math.sqrt(8 * Math.LN2) * median(sampling.profile_sigma_kms),
    });
  const begin = options.start?.intensity ?? backProjectedSamples(turned, options);
  const start = options.inside_out === true
    ? insideOutMap({ ...shape, intensity: begin }).intensity
    : begin;
  const floor = START_FLOOR * level;
  const fallback = priorImage(prior, { ...shape, level });
  const steps = entropySteps({
    operator,
    samples,
    prior: signed ? (image) => fallback(image.map(Math.abs)) : fallback,
    start: signed ? start : start.map((f) => Math.max(f, floor)),
    measure: signed ? SIGNED_ENTROPY : POSITIVE_ENTROPY,
  }, options);

  const describe = (state: EntropyState): EntropyMap => {
    const { image, prior, model, ...numbers } = state;
    return {
      ...numbers,
      map: options.inside_out === true
        ? insideOutMap({ ...shape, intensity: image })
        : { ...shape, intensity: image },
      prior: { ...shape, intensity: prior },
      model: sign === 1 ? model : model.map((m) => -m),
      level,
      warnings: [...warnings, ...goalRaised(state.goal, options)],
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
 * Runs {@linkcode maximumEntropySteps} to its end.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, default image, goal.
 * @returns The map with its fit to the data.
 * @throws {InputError} When the data cannot be mapped.
 * @throws {NotConverged} With the last map when the goal is out of reach or iterations run out.
 *
 * @example A goal below what the data allow is said
 * ```ts
 * import { maximumEntropy } from "@millrace/millrace/tomography";
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
 * assertThrows(
 *   () => maximumEntropy(trail, { pixels: 21, half_width_kms: 200, systemic_kms: 0 }),
 *   NotConverged,
 * );
 * ```
 */
export function maximumEntropy(
  trail: TrailSamples,
  options: MaximumEntropyOptions,
): EntropyMap {
  let last: EntropyMap | undefined;
  for (const state of maximumEntropySteps(trail, options)) last = state;
  return last!;
}
