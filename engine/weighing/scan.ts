import type { PartName } from "../synthesis/mod.ts";
import { cholesky, dot, productsOf, solveLower } from "./brightnesses.ts";
import { type FreeParameter, freeParameters } from "./free_parameters.ts";
import { stateOf } from "./parameter_state.ts";
import {
  type Evaluation,
  type Problem,
  type ScanCandidate,
  type ScanPlace,
  sumOfSquares,
} from "./problem.ts";

/**
 * Places at which a part is tried before it is fitted, as values from 0 to 1 between a parameter's
 * limits or as numbers themselves. A part that is not here has no places: it is fitted from the
 * start that the model gives.
 */
const GRIDS: Partial<Record<PartName, Readonly<Record<string, readonly number[]>>>> = {
  spot: {
    "spot.radius_over_a": [0.05, 0.2, 0.35, 0.5, 0.7, 0.9],
    "spot.mixing": [0, 0.25, 0.5, 0.75, 1],
    "spot.sigma_kms": [40, 110],
  },
  stream: {
    "stream.brightness_index": [-1, 1, 3],
    "stream.sigma_kms": [40, 100],
  },
  accretor: { "accretor.sigma_kms": [30, 100, 250] },
  outflow: { "outflow.sigma_kms": [400, 800, 1600] },
};

/** Paths whose grid is given between the parameter's limits. */
const RELATIVE = new Set(["spot.radius_over_a"]);

/** Parts that are looked for on a grid. */
export function isScanned(part: PartName): boolean {
  return GRIDS[part] !== undefined;
}

function candidatesOf(problem: Problem, part: PartName): readonly ScanCandidate[] {
  const known = problem.scans.get(part);
  if (known !== undefined) return known;
  const candidates = placesOf(problem, part).map(({ values, trail }) => {
    const column = problem.whitening.apply(trail);
    return { values, column, length_squared: sumOfSquares(column) };
  });
  problem.scans.set(part, candidates);
  return candidates;
}

function placesOf(problem: Problem, part: PartName): readonly ScanPlace[] {
  const known = problem.places.get(part);
  if (known !== undefined) return known;
  const { setup } = problem;
  const parameters = freeParameters([part], { ...setup, errors: {} });
  const state = stateOf([part], { setup, parameters });
  const at = parameters.map((parameter) => valuesAlong(parameter, GRIDS[part]![parameter.path]));
  const places: ScanPlace[] = [];
  for (const values of product(at)) {
    const made = problem.templates.raw(part, state(values));
    if (made === null) continue;
    places.push({
      values: new Map(parameters.map(({ path }, j) => [path, values[j]!])),
      trail: made[0]!,
    });
  }
  problem.places.set(part, places);
  return places;
}

function valuesAlong(parameter: FreeParameter, grid?: readonly number[]): readonly number[] {
  const { low, high, start, path } = parameter;
  if (grid === undefined) return [start];
  const values = RELATIVE.has(path) ? grid.map((t) => low + t * (high - low)) : grid;
  return values.map((value) => Math.min(high, Math.max(low, value)));
}

function product(lists: readonly (readonly number[])[]): number[][] {
  return lists.reduce<number[][]>(
    (all, list) => all.flatMap((head) => list.map((value) => [...head, value])),
    [[]],
  );
}

/** A candidate and by how much it would lower chi-square, everything else but amplitudes held. */
export interface ScanResult {
  /** Values of the part's parameters by path. */
  readonly values: ReadonlyMap<string, number>;
  /** Gain of chi-square. */
  readonly gain: number;
}

/**
 * Tries a part at every place of its grid on top of a fitted model: the gain of chi-square when its
 * brightness and those already there are fitted together (a matched filter).
 *
 * @param problem The problem.
 * @param options The part, and the model it is added to.
 * @returns All places with a positive brightness, best first.
 */
export function scan(
  problem: Problem,
  { part, base }: { readonly part: PartName; readonly base: Evaluation },
): readonly ScanResult[] {
  const { active, residual } = base;
  const { gram, size } = productsOf(active, residual);
  const lower = cholesky(gram, size);
  const results: ScanResult[] = [];
  for (const { values, column, length_squared } of candidatesOf(problem, part)) {
    const along = dot(column, residual);
    if (along <= 0) continue;
    const shared = solveLower(lower, active.map((other) => dot(other, column)));
    const free = length_squared - shared.reduce((sum, value) => sum + value * value, 0);
    if (free > 1e-6 * length_squared) results.push({ values, gain: along * along / free });
  }
  return results.sort((a, b) => b.gain - a.gain);
}
