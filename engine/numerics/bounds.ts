import { InputError } from "../errors.ts";
import { requireSameLength } from "./require.ts";

/** Lower and upper bounds of K parameters; infinite where there is none. */
export interface Bounds {
  /** Lower bounds. */
  readonly lower: Float64Array;
  /** Upper bounds; equal to the lower one where a parameter is fixed. */
  readonly upper: Float64Array;
}

/** Checks bounds against a start and fills in the missing ones. */
export function readBounds(
  start: Float64Array,
  lower: ArrayLike<number> | undefined,
  upper: ArrayLike<number> | undefined,
): Bounds {
  const action = "minimise";
  const k = start.length;
  if (lower) requireSameLength(action, "parameters and lower bounds", k, lower.length);
  if (upper) requireSameLength(action, "parameters and upper bounds", k, upper.length);
  const low = lower ? Float64Array.from(lower) : new Float64Array(k).fill(-Infinity);
  const high = upper ? Float64Array.from(upper) : new Float64Array(k).fill(Infinity);
  for (let j = 0; j < k; j++) {
    const x = start[j]!;
    if (Number.isFinite(x) && low[j]! <= x && x <= high[j]!) continue;
    throw new InputError({
      action,
      rule: `a starting value must be finite and within its bounds [${low[j]}, ${high[j]}]`,
      value: x,
      key: `parameter ${j}`,
    });
  }
  return { lower: low, upper: high };
}
