import type { MaximumEntropyOptions } from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import { type MappedLine, membersOf } from "../map_line.ts";
import type { Target } from "../target.ts";

/**
 * How entropy with a uniform default would make the map of a line, whatever did make it: what scans
 * compare must not fall back on itself.
 *
 * @param mapped The map.
 * @param options The target.
 * @param options.target The target.
 * @returns The trail and the options, the goal of `[map]` among them; one out of reach is raised.
 */
export function entropyAround(
  mapped: MappedLine,
  options: { target: Target },
): { trail: Trail; options: MaximumEntropyOptions } {
  const { map: settings } = options.target.settings;
  const { map: { pixels, half_width_kms }, systemic_kms, sign, recipe, data } = mapped;
  return {
    trail: data,
    options: {
      pixels,
      half_width_kms,
      systemic_kms,
      blends: membersOf(mapped),
      // Back-projected absorption has its sign turned already.
      absorption: sign === "absorption" && recipe.inversion !== "back-projection",
      signed: sign === "mixed",
      free_baselines: settings.baseline,
      prior: { kind: "uniform" },
      force: recipe.force === true,
      reduced_chi_square: settings.reduced_chi_square,
      raise_goal: true,
    },
  };
}
