import { checkTrail, type InversionRecipe, makeInverter } from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import { pause } from "../pause.ts";
import type { Inverted, InvertOptions } from "./inverted.ts";

/**
 * Back-projects a trail. A line in absorption must come with its sign turned already.
 *
 * @param trail The trail.
 * @param options How.
 * @returns The map and its fit.
 */
export async function byBackProjection(trail: Trail, options: InvertOptions): Promise<Inverted> {
  const { settings, pixels, systemic_kms, sign, force, signal } = options;
  const recipe: InversionRecipe = {
    inversion: "back-projection",
    pixels,
    half_width_kms: settings.half_width_kms,
    systemic_kms,
    force,
  };
  // The native exposures are inverted: phase bins are for display.
  const turn = sign === "absorption" ? -1 : 1;
  const { map, model, scale, reduced_chi_square } = makeInverter(trail, recipe)(trail);
  await pause(signal);
  return {
    map,
    scale: turn * scale,
    model: turn === 1 ? model : model.map((m) => -m),
    reduced_chi_square,
    sample_count: trail.error.reduce((n, error) => n + (Number.isFinite(error) ? 1 : 0), 0),
    goal: null,
    multiplier: null,
    iterations: 1,
    converged: true,
    misalignment: null,
    warnings: checkTrail(trail, recipe).map((warning) => ({ ...warning, line: trail.line.name })),
    recipe,
    resampled: null,
    remade: null,
  };
}
