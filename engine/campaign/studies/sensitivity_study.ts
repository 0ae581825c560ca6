import { InputError, NotConverged, type Warning } from "../../errors.ts";
import {
  mapFeatures,
  type MapPlace,
  type SensitivityMap,
  sensitivityMaps,
  totalVariation,
  type VariationMap,
  type VelocityMap,
} from "../../tomography/mod.ts";
import type { MappedLine } from "../map_line.ts";
import { pause } from "../pause.ts";

/** Relative change of χ². */
const CHANGE = 0.05;

/** A feature in a map of another χ². */
export interface FeatureThere extends MapPlace {
  /** Its flux over that of the map. */
  readonly flux_fraction: number;
}

/** A map at another χ², with what becomes of the features there. */
export interface SensitivityPart extends SensitivityMap {
  /** One entry a feature of the map, in order; null where there is none within the resolution. */
  readonly features: readonly (FeatureThere | null)[];
}

/** Maps at χ² a little lower and a little higher. */
export interface Sensitivity {
  /** Fits the data more closely. */
  readonly closer: SensitivityPart;
  /** Fits the data less closely. */
  readonly looser: SensitivityPart;
  /** Half the difference of the two, closer minus looser. */
  readonly half_difference: VelocityMap;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Maps of a line at a χ² 5 % lower and 5 % higher than that of its map.
 *
 * @param mapped The map, by entropy or total variation.
 * @param options How to work.
 * @param options.signal Aborts the work.
 * @returns The maps.
 * @throws {InputError} When a back-projection made the map: it has no χ² to change.
 */
export async function sensitivityStudy(
  mapped: MappedLine,
  options: { signal?: AbortSignal } = {},
): Promise<Sensitivity> {
  const { recipe, data, trail, reduced_chi_square, map } = mapped;
  if (recipe.inversion === "back-projection") {
    throw new InputError({
      action: `make sensitivity maps of ${trail.line.name}`,
      rule: "the map must be fitted to a χ²",
      value: recipe.inversion,
      key: "map.method",
      remedy: "use entropy or total-variation",
    });
  }
  const made = recipe.inversion === "entropy"
    ? sensitivityMaps(data, {
      ...recipe,
      found: { map, level: recipe.level!, reduced_chi_square },
      change: CHANGE,
    })
    : variationMaps(mapped);
  await pause(options.signal);
  return {
    closer: withFeatures(made.closer, mapped),
    looser: withFeatures(made.looser, mapped),
    half_difference: made.half_difference,
    warnings: made.warnings.map((warning) => ({ ...warning, line: trail.line.name })),
  };
}

/** The same by total variation, which is brought to another χ² by its weight. */
function variationMaps(mapped: MappedLine): Omit<Sensitivity, "closer" | "looser"> & {
  readonly closer: SensitivityMap;
  readonly looser: SensitivityMap;
} {
  const { recipe, data, reduced_chi_square, map } = mapped;
  if (recipe.inversion !== "total-variation") throw new TypeError("not by total variation");
  const at = (factor: number): SensitivityMap => {
    const goal = factor * reduced_chi_square;
    let found: VariationMap;
    try {
      found = totalVariation(data, { ...recipe, start: map, reduced_chi_square: goal });
    } catch (error) {
      if (!(error instanceof NotConverged)) throw error;
      found = error.partial as VariationMap;
    }
    return {
      goal,
      reached: Math.abs(found.reduced_chi_square / goal - 1) < 0.01,
      reduced_chi_square: found.reduced_chi_square,
      map: found.map,
    };
  };
  const closer = at(1 - CHANGE), looser = at(1 + CHANGE);
  return {
    closer,
    looser,
    half_difference: {
      ...map,
      intensity: closer.map.intensity.map((f, k) => 0.5 * (f - looser.map.intensity[k]!)),
    },
    warnings: closer.reached ? [] : [{
      code: "sensitivity-out-of-reach",
      text: `No map of this kind fits the data to a reduced chi-square of ${
        closer.goal.toPrecision(4)
      }, ${100 * CHANGE} % below that of the map: the closer map is at ${
        closer.reduced_chi_square.toPrecision(4)
      }`,
    }],
  };
}

function withFeatures(part: SensitivityMap, mapped: MappedLine): SensitivityPart {
  const { centre, resolution_kms } = mapped;
  const there = mapFeatures(part.map, { centre, resolution_kms, limit: Infinity });
  return {
    ...part,
    features: mapped.features.map((feature) => {
      const away = (one: MapPlace) =>
        Math.hypot(one.vx_kms - feature.vx_kms, one.vy_kms - feature.vy_kms);
      const nearest = there.toSorted((a, b) => away(a) - away(b))[0];
      if (nearest === undefined || away(nearest) > resolution_kms) return null;
      const { vx_kms, vy_kms, flux_fraction } = nearest;
      return { vx_kms, vy_kms, flux_fraction };
    }),
  };
}
