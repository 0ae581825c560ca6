import { gaussLegendre } from "../numerics/mod.ts";

const rules = new Map<number, ReturnType<typeof gaussLegendre>>();

/** The Gauss–Legendre rule of n points on [−1, 1], made once. */
export function legendre(n: number): ReturnType<typeof gaussLegendre> {
  let rule = rules.get(n);
  if (rule === undefined) rules.set(n, rule = gaussLegendre(n));
  return rule;
}

/** ∫ f over [low, high] by Gauss–Legendre with n points on each of a number of equal panels. */
export function integrate(
  f: (x: number) => number,
  [low, high]: readonly [low: number, high: number],
  { points = 40, panels = 4 }: { points?: number; panels?: number } = {},
): number {
  const { nodes, weights } = legendre(points);
  const half = (high - low) / panels / 2;
  let sum = 0;
  for (let p = 0; p < panels; p++) {
    const centre = low + (2 * p + 1) * half;
    for (let k = 0; k < points; k++) sum += weights[k]! * f(centre + half * nodes[k]!);
  }
  return sum * half;
}
