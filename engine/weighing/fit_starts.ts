import type { RandomStream } from "../numerics/mod.ts";
import type { FreeParameter } from "./free_parameters.ts";
import type { Hypothesis } from "./hypothesis.ts";
import { stateOf } from "./parameter_state.ts";
import { evaluate, type Problem, sumOfSquares } from "./problem.ts";

const DISC_GRID = {
  "disc.outer_radius_over_a": [0.2, 0.3, 0.42, 0.6],
  "disc.inner_radius_over_a": [0.02, 0.06],
  "disc.emissivity_index": [0.5, 1.5, 2.5],
} as const;

/** The place of a grid of discs that fits best, as values by path. */
export function coarseStart(
  problem: Problem,
  { hypothesis, parameters }: {
    readonly hypothesis: Hypothesis;
    readonly parameters: readonly FreeParameter[];
  },
): ReadonlyMap<string, number> {
  const state = stateOf(hypothesis, { setup: problem.setup, parameters });
  const grids = parameters.map(({ path, start }) =>
    path in DISC_GRID ? [...DISC_GRID[path as keyof typeof DISC_GRID], start] : [start]
  );
  let best = { chi_square: Infinity, values: parameters.map(({ start }) => start) };
  const visit = (head: readonly number[]) => {
    if (head.length < grids.length) {
      for (const value of grids[head.length]!) visit([...head, value]);
      return;
    }
    const made = evaluate(problem, { hypothesis, state: state(head) });
    const chi_square = made === null ? Infinity : sumOfSquares(made.residual);
    if (chi_square < best.chi_square) best = { chi_square, values: [...head] };
  };
  visit([]);
  return new Map(parameters.map(({ path }, j) => [path, best.values[j]!]));
}

/** Values of parameters within their bounds, from those known by path. */
export function startValues(
  parameters: readonly FreeParameter[],
  at: ReadonlyMap<string, number>,
): Float64Array {
  return Float64Array.from(parameters, ({ path, low, high, start }) => {
    return Math.min(high, Math.max(low, at.get(path) ?? start));
  });
}

/** Whether two places differ in more than a width, which is easily found from any start. */
export function isOtherPlace(
  a: ReadonlyMap<string, number>,
  b: ReadonlyMap<string, number>,
): boolean {
  return [...a].some(([path, value]) => !path.endsWith("sigma_kms") && value !== b.get(path));
}

/** A start at random within the bounds, but for what is settled. */
export function randomStart(
  parameters: readonly FreeParameter[],
  { settled, random }: {
    readonly settled: ReadonlyMap<string, number>;
    readonly random: RandomStream;
  },
): ReadonlyMap<string, number> {
  return new Map(parameters.map(({ path, low, high }) => {
    const draw = low + (high - low) * random.uniform();
    return [path, settled.get(path) ?? draw];
  }));
}
