import { InputError } from "../errors.ts";
import { fitHypothesis, type HypothesisFit, total, valuesOf } from "./fit_hypothesis.ts";
import type { Problem } from "./problem.ts";

/** How chi-square grows along one parameter when all others are fitted. */
export interface ProfileLikelihood {
  /** Path of the parameter. */
  readonly path: string;
  /** Values at which it was held. */
  readonly values: readonly number[];
  /** Chi-square less its minimum, priors included; null where the model cannot be. */
  readonly gain: readonly (number | null)[];
}

/**
 * Holds one parameter at a row of values and fits the rest.
 *
 * @param problem The problem.
 * @param options The fit it starts from, the parameter's path, and the values.
 * @returns Growth of chi-square at each value.
 * @throws {InputError} When the fit has no such parameter.
 *
 * @example
 * ```ts
 * import {
 *   fitHypothesis,
 *   makeProblem,
 *   profileLikelihood,
 *   simulateTrail,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertGreater } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 12, seed: 1 });
 * const problem = makeProblem(weighingData(trail), { binary });
 * const fit = fitHypothesis(problem, { hypothesis: ["disc"] });
 * const { gain } = profileLikelihood(problem, {
 *   fit,
 *   path: "disc.emissivity_index",
 *   values: [1, 1.5, 2],
 * });
 * assertGreater(gain[0]!, gain[1]!);
 * assertGreater(gain[2]!, gain[1]!);
 * ```
 */
export function profileLikelihood(
  problem: Problem,
  { fit, path, values }: {
    readonly fit: HypothesisFit;
    readonly path: string;
    readonly values: readonly number[];
  },
): ProfileLikelihood {
  const parameter = fit.parameters.find((candidate) => candidate.path === path);
  if (parameter === undefined || parameter.section === "geometry") {
    throw new InputError({
      action: "profile a likelihood",
      rule: `the path must be one of ${
        fit.parameters.filter(({ section }) => section !== "geometry").map((p) => p.path).join(", ")
      }`,
      value: path,
    });
  }
  const { section, key } = parameter;
  const chi = values.map((value) => {
    const model = {
      ...problem.setup.model,
      [section]: { ...fit.state.model[section as "disc"], [key]: value },
    };
    const held: Problem = {
      ...problem,
      setup: { ...problem.setup, model, fixed: [...problem.setup.fixed ?? [], path] },
    };
    const there = fitHypothesis(held, {
      hypothesis: fit.hypothesis,
      base: {
        ...fit,
        parameters: fit.parameters.filter((p) => p.path !== path),
        values: fit.values.filter((_, j) => fit.parameters[j]!.path !== path),
      },
      warm: valuesOf(fit),
    });
    return Number.isFinite(there.chi_square) ? total(there) : null;
  });
  const least = Math.min(total(fit), ...chi.filter((value) => value !== null));
  return { path, values, gain: chi.map((value) => value === null ? null : value - least) };
}
