import type { LinearOperator } from "./linear_operator.ts";

/** What a bound depends on beside the operator. */
interface BoundOf {
  readonly weight: Float64Array;
  readonly level: number;
  readonly blur: number;
}

const bounds = new WeakMap<LinearOperator, BoundOf & { readonly bound: number }>();

/** Replicas share operator, errors and level: their bound is found once. */
export function knownBound(operator: LinearOperator, of: BoundOf, find: () => number): number {
  const known = bounds.get(operator);
  const same = known?.level === of.level && known.blur === of.blur &&
    known.weight.every((w, k) => w === of.weight[k]);
  if (same) return known.bound;
  const bound = find();
  bounds.set(operator, { ...of, bound });
  return bound;
}

/** Largest eigenvalue of the normal operator relative to the metric, by power iteration, with room. */
export function largestRatio(
  { normal, solve, start }: {
    readonly normal: (values: Float64Array, into: Float64Array) => void;
    readonly solve: (values: Float64Array) => Float64Array;
    readonly start: Float64Array;
  },
): number {
  const POWERS = 12, ROOM = 1.3;
  let values = start.map((_, k) => Math.sin(12.9898 * k + 1) + Math.cos(0.37 * k));
  const into = new Float64Array(start.length);
  let ratio = 0;
  for (let p = 0; p < POWERS; p++) {
    normal(values, into);
    const next = solve(into);
    const before = Math.sqrt(values.reduce((s, v) => s + v * v, 0));
    const after = Math.sqrt(next.reduce((s, v) => s + v * v, 0));
    ratio = after / before;
    values = next.map((v) => v / after);
  }
  return ROOM * ratio;
}
