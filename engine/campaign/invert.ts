import type { Trail } from "../trail/mod.ts";
import { byBackProjection } from "./inversion/by_back_projection.ts";
import { byEntropy } from "./inversion/by_entropy.ts";
import { byVariation } from "./inversion/by_variation.ts";
import type { Inverted, InvertOptions } from "./inversion/inverted.ts";

/**
 * Inverts a trail as `[map]` asks.
 *
 * @param trail The trail.
 * @param options How.
 * @returns The map, its fit, and the recipe for maps of resampled data.
 */
export function invertTrail(trail: Trail, options: InvertOptions): Promise<Inverted> {
  switch (options.settings.method) {
    case "back-projection":
      return byBackProjection(trail, options);
    case "entropy":
      return byEntropy(trail, options);
    case "total-variation":
      return byVariation(trail, options);
  }
}
