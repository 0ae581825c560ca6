import { InputError, type Warning } from "../errors.ts";
import type { TrailSamples } from "./check_trail.ts";
import { type EntropyMap, maximumEntropy, type MaximumEntropyOptions } from "./maximum_entropy.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** A map at another chi-square than the one that was chosen. */
export interface SensitivityMap {
  /** Chi-square per sample that it aims for. */
  readonly goal: number;
  /** Whether the goal could be reached. If not, the map is the closest fit there is, within 2 %. */
  readonly reached: boolean;
  /** Chi-square over the number of unmasked samples of this map. */
  readonly reduced_chi_square: number;
  /** The map. */
  readonly map: VelocityMap;
}

/** What {@linkcode sensitivityMaps} gives. */
export interface SensitivityMaps {
  /** Fits the data more closely: more structure, more noise. */
  readonly closer: SensitivityMap;
  /** Fits the data less closely: less structure, less noise. */
  readonly looser: SensitivityMap;
  /**
   * Half the difference of the two, closer minus looser, per pixel as in the maps: what the choice of
   * chi-square within these bounds does to each pixel.
   */
  readonly half_difference: VelocityMap;
  /** What a user should know: a closer goal that could not be reached. */
  readonly warnings: readonly Warning[];
}

/** Options of {@linkcode sensitivityMaps}: those the map was made with, and the map. */
export interface SensitivityMapsOptions extends MaximumEntropyOptions {
  /** The map around which to look. */
  readonly found: Pick<EntropyMap, "map" | "level" | "reduced_chi_square">;
  /**
   * Relative change of chi-square.
   *
   * @default {0.05}
   */
  readonly change?: number;
}

/**
 * Maximum-entropy maps a little closer to the data and a little less close than a map that was solved,
 * started from it. Chi-square at the "right" value is a convention (its own scatter is √(2/N), and an error
 * of 5 % in the errors moves it by 10 %): a structure that comes and goes between these maps is not there
 * to be discussed.
 *
 * @param trail Exposures, data, errors.
 * @param options Options of the map that was solved, and that map. Its goal or multiplier is not used.
 * @returns Two maps and half their difference.
 * @throws {InputError} When the change is not between 0 and 1, or the data cannot be mapped.
 * @throws {NotConverged} When iterations run out.
 *
 * @example
 * ```ts
 * import { makeProjector, maximumEntropy, sensitivityMaps } from "@millrace/millrace/tomography";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const count = 16, bins = 61;
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
 * const blob = Float64Array.from(
 *   { length: 441 },
 *   (_, k) => 3e-4 * Math.exp(-0.5 * ((k % 21 - 6) ** 2 + (Math.floor(k / 21) - 15) ** 2) / 9),
 * );
 * const random = randomStream(1);
 * const flux = makeProjector(sampling, shape).forward(blob).map((f) => f + 0.01 * random.normal());
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const options = { ...shape, reduced_chi_square: 1.1 };
 * const found = maximumEntropy(trail, options);
 * const { closer, looser } = sensitivityMaps(trail, { ...options, found });
 * assertAlmostEquals(closer.reduced_chi_square / found.reduced_chi_square, 0.95, 2e-3);
 * assertAlmostEquals(looser.reduced_chi_square / found.reduced_chi_square, 1.05, 2e-3);
 * ```
 */
export function sensitivityMaps(
  trail: TrailSamples,
  options: SensitivityMapsOptions,
): SensitivityMaps {
  const { found, change = 0.05 } = options;
  if (!(change > 0 && change < 1)) {
    throw new InputError({
      action: "make sensitivity maps",
      rule: "the change of chi-square must lie between 0 and 1",
      value: change,
      key: "change",
    });
  }
  const at = (factor: number): SensitivityMap => {
    const goal = factor * found.reduced_chi_square;
    const { map, reduced_chi_square, goal: used } = maximumEntropy(trail, {
      ...options,
      level: found.level,
      start: found.map,
      multiplier: null,
      reduced_chi_square: goal,
      raise_goal: true,
    });
    return { goal, reached: used === goal, reduced_chi_square, map };
  };
  const closer = at(1 - change), looser = at(1 + change);
  return {
    closer,
    looser,
    half_difference: {
      ...found.map,
      intensity: closer.map.intensity.map((f, k) => 0.5 * (f - looser.map.intensity[k]!)),
    },
    warnings: closer.reached ? [] : [{
      code: "sensitivity-out-of-reach",
      text: `No map of this kind fits the data to a reduced chi-square of ${
        closer.goal.toPrecision(4)
      }, ${(100 * change).toFixed(0)} % below that of the map: the closer map is at ${
        closer.reduced_chi_square.toPrecision(4)
      }.`,
    }],
  };
}
