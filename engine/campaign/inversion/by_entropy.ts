import { NotConverged, type Warning } from "../../errors.ts";
import {
  type EntropyMap,
  fitOfMap,
  type InversionRecipe,
  type MaximumEntropyOptions,
  maximumEntropySteps,
} from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import { pause } from "../pause.ts";
import type { Inverted, InvertOptions } from "./inverted.ts";

/** A replica that does not settle would end the whole run: it is given time. */
export const REPLICA_ITERATIONS = 1000;

/** A recipe of maximum entropy. */
export type EntropyRecipe = Extract<InversionRecipe, { readonly inversion: "entropy" }>;

/**
 * The options of a maximum-entropy map that `[map]` and the line ask for, but for its goal.
 *
 * @param options How the trail is inverted.
 * @returns Options for `maximumEntropy`.
 */
export function entropyOptions(options: InvertOptions): MaximumEntropyOptions {
  const { settings, pixels, systemic_kms, prior, blends, sign, force } = options;
  return {
    pixels,
    half_width_kms: settings.half_width_kms,
    systemic_kms,
    // What is of either sign has no mean that a default image could follow.
    prior: sign === "mixed" ? { kind: "uniform" } : prior,
    blends,
    absorption: sign === "absorption",
    signed: sign === "mixed",
    free_baselines: settings.baseline,
    inside_out: settings.coordinates === "inside-out",
    force,
  };
}

/**
 * Maximum entropy to the goal of `[map]`; a goal that no map reaches is raised, which is a warning.
 *
 * @param trail The trail.
 * @param options How.
 * @returns The map and its fit.
 */
export async function byEntropy(trail: Trail, options: InvertOptions): Promise<Inverted> {
  const { settings, sign, progress, signal } = options;
  const asked = entropyOptions(options);
  let state: EntropyMap | undefined;
  const warnings: Warning[] = [];
  const goal = { reduced_chi_square: settings.reduced_chi_square, raise_goal: true };
  try {
    for (state of maximumEntropySteps(trail, { ...asked, ...goal })) {
      progress?.(state.iterations, 200, `${trail.line.name}: entropy`);
      await pause(signal);
    }
  } catch (error) {
    // The partial map is usable: it says how near to the goal it came.
    if (!(error instanceof NotConverged)) throw error;
    state = error.partial as EntropyMap;
    warnings.push({ code: "goal-not-reached", text: error.message });
  }
  const found = state!;
  warnings.push(...found.warnings);
  const { sample_count } = fitOfMap(trail, { model: found.model });
  return {
    map: found.map,
    scale: sign === "absorption" ? -1 : 1,
    model: found.model,
    reduced_chi_square: found.reduced_chi_square,
    sample_count,
    goal: found.goal,
    multiplier: found.multiplier,
    iterations: found.iterations,
    converged: found.converged,
    misalignment: found.misalignment,
    warnings: warnings.map((warning) => ({ ...warning, line: trail.line.name })),
    // A fixed χ² would fit the noise of a replica, which has twice as much.
    recipe: {
      inversion: "entropy",
      ...asked,
      multiplier: found.multiplier,
      start: found.map,
      level: found.level,
      max_iterations: REPLICA_ITERATIONS,
    },
    resampled: null,
    remade: null,
  };
}
