import { InputError, NotConverged, type Warning } from "../errors.ts";
import {
  type BlendMember,
  type EntropyMap,
  fitOfMap,
  type InversionRecipe,
  makeInverter,
  type MaximumEntropyOptions,
  maximumEntropySteps,
  type PriorImage,
  type VelocityMap,
} from "../tomography/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { pause } from "./pause.ts";
import type { MapSettings } from "./schema/map_section.ts";

/** A trail, inverted. */
export interface Inverted {
  /** The map. */
  readonly map: VelocityMap;
  /** Factor on the map's projection that fits the data best: 1 where the inversion fits them itself. */
  readonly scale: number;
  /** χ² over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** Iterations; 1 for a direct inversion. */
  readonly iterations: number;
  /** Whether the iteration met its goals. */
  readonly converged: boolean;
  /** How far the gradients of entropy and misfit are from parallel; null for other inversions. */
  readonly misalignment: number | null;
  /** Whether the line was inverted with its sign turned. */
  readonly absorption: boolean;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
  /** How maps of resampled data are made: with the multiplier of this one held, where it has one. */
  readonly recipe: InversionRecipe;
}

/** Options of {@linkcode invertTrail}. */
export interface InvertOptions {
  /** `[map]`. */
  readonly settings: MapSettings;
  /** Pixels along each side. */
  readonly pixels: number;
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** Default image of an entropy map. */
  readonly prior: PriorImage;
  /** Lines mapped with it. */
  readonly blends: readonly BlendMember[];
  /** Whether to go on in spite of a large gap in phase. */
  readonly force: boolean;
  /** Told of each iteration. */
  readonly progress?: Progress;
  /** Aborts the work. */
  readonly signal?: AbortSignal;
}

/**
 * Inverts a trail as `[map]` asks.
 *
 * @param trail The trail.
 * @param options How.
 * @returns The map, its fit, and the recipe for maps of resampled data.
 */
export function invertTrail(trail: Trail, options: InvertOptions): Promise<Inverted> {
  return options.settings.method === "entropy"
    ? byEntropy(trail, options)
    : byBackProjection(trail, options);
}

async function byBackProjection(trail: Trail, options: InvertOptions): Promise<Inverted> {
  const { settings, pixels, systemic_kms, blends, force, signal } = options;
  if (blends.length > 0) {
    throw new InputError({
      action: `map ${trail.line.name} with its blends`,
      rule: "blends can be told apart by a fit alone",
      value: settings.method,
      key: "map.method",
      remedy: 'use map.method = "entropy"',
    });
  }
  const recipe: InversionRecipe = {
    inversion: "back-projection",
    pixels,
    half_width_kms: settings.half_width_kms,
    systemic_kms,
    force,
  };
  // The native exposures are inverted: phase bins are for display.
  const { map, scale, reduced_chi_square } = makeInverter(trail, recipe)(trail);
  await pause(signal);
  return {
    map,
    scale,
    reduced_chi_square,
    sample_count: trail.error.reduce((n, error) => n + (Number.isFinite(error) ? 1 : 0), 0),
    iterations: 1,
    converged: true,
    misalignment: null,
    absorption: false,
    warnings: [],
    recipe,
  };
}

async function byEntropy(trail: Trail, options: InvertOptions): Promise<Inverted> {
  const { settings, pixels, systemic_kms, prior, blends, force, progress, signal } = options;
  const absorption = trail.flux.reduce((sum, value) => sum + value, 0) < 0;
  const asked: MaximumEntropyOptions = {
    pixels,
    half_width_kms: settings.half_width_kms,
    systemic_kms,
    prior,
    blends,
    absorption,
    force,
  };
  const goal = settings.reduced_chi_square;
  let state: EntropyMap | undefined;
  const warnings: Warning[] = [];
  try {
    for (state of maximumEntropySteps(trail, { ...asked, reduced_chi_square: goal })) {
      progress?.(state.iterations, 200, `${trail.line.name}: entropy`);
      await pause(signal);
    }
  } catch (error) {
    // The partial map is usable: it says how near to the goal it came.
    if (!(error instanceof NotConverged)) throw error;
    state = error.partial as EntropyMap;
    warnings.push({ code: "goal-not-reached", line: trail.line.name, text: error.message });
  }
  const found = state!;
  warnings.push(...found.warnings.map((warning) => ({ ...warning, line: trail.line.name })));
  const fit = fitOfMap(trail, { model: found.model });
  return {
    map: found.map,
    scale: absorption ? -1 : 1,
    reduced_chi_square: fit.reduced_chi_square,
    sample_count: fit.sample_count,
    iterations: found.iterations,
    converged: found.converged,
    misalignment: found.misalignment,
    absorption,
    warnings,
    // A fixed χ² would fit the noise of a replica, which has twice as much.
    recipe: {
      inversion: "entropy",
      ...asked,
      multiplier: found.multiplier,
      start: found.map,
      level: found.level,
    },
  };
}
