import { NotConverged, type Warning } from "../../errors.ts";
import {
  crossValidate,
  fitOfMap,
  goalRaised,
  type InversionRecipe,
  remakeMap,
  type TotalVariationOptions,
  totalVariationSteps,
  type VariationMap,
  type VelocityMap,
} from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import { pause } from "../pause.ts";
import type { Inverted, InvertOptions } from "./inverted.ts";

/** Weights tried by leaving out exposures, over the one that the noise gives. */
const TRIED = [0.25, 0.5, 1, 2, 4];

/** A replica that does not settle would end the whole run: it is given time. */
const REPLICA_ITERATIONS = 2000;

/** A goal missed by less was not out of reach: the iterations ran out. */
const NEAR = 1.01;

/** A raised goal is so many times what was reached. */
const RAISED = 1.02;

/**
 * Total variation with the weight that `map.weight` asks for: the one that reaches the goal for χ², the
 * one that best predicts exposures left out, or the one that keeps noise from making structure.
 *
 * @param trail The trail.
 * @param options How.
 * @returns The map and its fit, and the map of the map: what the inversion does to places is here not
 * small beside the noise.
 */
export async function byVariation(trail: Trail, options: InvertOptions): Promise<Inverted> {
  const { settings, pixels, systemic_kms, blends, sign, force } = options;
  const asked: TotalVariationOptions = {
    pixels,
    half_width_kms: settings.half_width_kms,
    systemic_kms,
    blends,
    absorption: sign === "absorption",
    free_baselines: settings.baseline,
    force,
  };
  const warnings: Warning[] = [];
  const goal = settings.weight === "chi-square" ? settings.reduced_chi_square : null;
  let found: VariationMap;
  let used = goal;
  if (goal !== null) {
    found = await variation(trail, { ...options, asked: { ...asked, reduced_chi_square: goal } });
    if (!found.converged && found.reduced_chi_square > NEAR * goal) {
      used = RAISED * found.reduced_chi_square;
      const raised = { ...asked, level: found.level, reduced_chi_square: used };
      found = await variation(trail, { ...options, asked: raised });
      warnings.push(...goalRaised(used, { reduced_chi_square: goal }));
    }
  } else {
    found = await variation(trail, { ...options, asked: { ...asked, weight: "noise" } });
    if (settings.weight === "cross-validation") {
      const weight = await predictingWeight(trail, { ...options, asked, found });
      const held = { ...asked, weight, level: found.level, start: found.map };
      found = await variation(trail, { ...options, asked: held });
    }
  }
  if (!found.converged) {
    warnings.push({
      code: "goal-not-reached",
      text: `The map still changed by ${(100 * found.change).toPrecision(2)} % in ten iterations ` +
        `after ${found.iterations}: it is not the final one`,
    });
  }
  warnings.push(...found.warnings);
  const recipe: InversionRecipe = {
    inversion: "total-variation",
    ...asked,
    weight: found.weight,
    start: found.map,
    level: found.level,
    max_iterations: REPLICA_ITERATIONS,
  };
  return {
    map: found.map,
    scale: sign === "absorption" ? -1 : 1,
    model: found.model,
    reduced_chi_square: found.reduced_chi_square,
    sample_count: fitOfMap(trail, { model: found.model }).sample_count,
    goal: used,
    multiplier: found.weight,
    iterations: found.iterations,
    converged: found.converged,
    misalignment: null,
    warnings: warnings.map((warning) => ({ ...warning, line: trail.line.name })),
    recipe,
    resampled: null,
    remade: remadeMap(trail, { recipe, map: found.map }),
  };
}

/** Runs to the end; iterations that run out leave a map that says so. */
async function variation(
  trail: Trail,
  options: InvertOptions & { readonly asked: TotalVariationOptions },
): Promise<VariationMap> {
  const { asked, progress, signal } = options;
  let state: VariationMap | undefined;
  try {
    for (state of totalVariationSteps(trail, asked)) {
      progress?.(state.iterations, 400, `${trail.line.name}: total variation`);
      await pause(signal);
    }
  } catch (error) {
    if (!(error instanceof NotConverged)) throw error;
    state = error.partial as VariationMap;
  }
  return state!;
}

/** The weight that best predicts blocks of exposures that were left out. */
async function predictingWeight(
  trail: Trail,
  options: InvertOptions & {
    readonly asked: TotalVariationOptions;
    readonly found: VariationMap;
  },
): Promise<number> {
  const { asked, found, progress, signal } = options;
  const misses: number[] = [];
  for (const [done, factor] of TRIED.entries()) {
    const { predicted_chi_square } = crossValidate(trail, {
      recipes: [{
        inversion: "total-variation",
        ...asked,
        weight: factor * found.weight,
        level: found.level,
        start: found.map,
      }],
    });
    misses.push(predicted_chi_square[0]!);
    progress?.(done + 1, TRIED.length, `${trail.line.name}: weights tried`);
    await pause(signal);
  }
  return found.weight * TRIED[misses.indexOf(Math.min(...misses))]!;
}

/** The map of the map, from which the inversion's bias is judged; null where it does not settle. */
function remadeMap(trail: Trail, found: Pick<Inverted, "recipe" | "map">): VelocityMap | null {
  try {
    return remakeMap(trail, found);
  } catch (error) {
    if (!(error instanceof NotConverged)) throw error;
    return null;
  }
}
