import { InputError } from "../errors.ts";

/** Nodes and weights of a quadrature rule. */
export interface Quadrature {
  /** Where the integrand is evaluated, increasing. */
  readonly nodes: Float64Array;
  /** Weight of each node. */
  readonly weights: Float64Array;
}

/**
 * Gauss–Legendre rule on [−1, 1], exact for polynomials up to degree 2n − 1 (nodes by Newton's method on the
 * Legendre recurrence: Abramowitz & Stegun 25.4.29).
 *
 * @param n Number of nodes, from 1.
 * @returns Nodes and weights, n each.
 * @throws {InputError} When `n` is not a whole number from 1 to 10000.
 *
 * @example
 * ```ts
 * import { gaussLegendre } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { nodes, weights } = gaussLegendre(5);
 * const integral = nodes.reduce((sum, x, i) => sum + weights[i]! * x ** 8, 0);
 * assertAlmostEquals(integral, 2 / 9, 1e-15);
 * ```
 */
export function gaussLegendre(n: number): Quadrature {
  if (!Number.isInteger(n) || n < 1 || n > 10_000) {
    throw new InputError({
      action: "make quadrature rule",
      rule: "the number of nodes must be whole, from 1 to 10000",
      value: n,
    });
  }
  const nodes = new Float64Array(n);
  const weights = new Float64Array(n);
  for (let i = 0; i < Math.ceil(n / 2); i++) {
    let x = 2 * i + 1 === n ? 0 : Math.cos(Math.PI * (i + 0.75) / (n + 0.5));
    let slope = 0;
    for (let round = 0; round < 100; round++) {
      let before = 1;
      let value = x;
      for (let k = 2; k <= n; k++) {
        [before, value] = [value, ((2 * k - 1) * x * value - (k - 1) * before) / k];
      }
      slope = n * (before - x * value) / (1 - x * x);
      const change = value / slope;
      x -= change;
      if (Math.abs(change) <= 1e-16) break;
    }
    nodes[i] = -x;
    nodes[n - 1 - i] = x;
    weights[i] = weights[n - 1 - i] = 2 / ((1 - x * x) * slope * slope);
  }
  return { nodes, weights };
}
