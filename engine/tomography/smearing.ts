import { gaussLegendre } from "../numerics/mod.ts";

/** Largest smear over σ per panel, and the number of Gauss–Legendre points it takes for 1e-4. */
const ORDERS: readonly (readonly [number, number])[] = [
  [0.02, 1],
  [0.3, 2],
  [1, 3],
  [3, 5],
  [5, 7],
  [8, 15],
];

/** Offsets in phase and weights that stand for one exposure; the weights add up to one. */
export interface SmearingRule {
  /** Phase minus that of mid-exposure, cycles. */
  readonly offset: Float64Array;
  /** Weights, the same number of values. */
  readonly weight: Float64Array;
}

/**
 * Instants within an exposure whose mean stands for the whole exposure to 1e-4 of a profile's peak.
 * The number of Gauss–Legendre points grows with L/σ, the largest smear over the width of the
 * instrumental profile; exposures with L/σ > 8 are cut into equal panels.
 *
 * @param phase_width Duration of the exposure, cycles.
 * @param smear_over_sigma L/σ: 2π × duration in cycles × largest speed in the map, over σ.
 * @returns Offsets and weights.
 *
 * @example A short exposure is one instant
 * ```ts
 * import { smearingRule } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(smearingRule(0, 0).offset, Float64Array.of(0));
 * assertEquals(smearingRule(0.01, 4).offset.length, 7);
 * ```
 */
export function smearingRule(phase_width: number, smear_over_sigma: number): SmearingRule {
  const largest = ORDERS[ORDERS.length - 1]?.[0] ?? 8;
  const panels = Math.max(1, Math.ceil(smear_over_sigma / largest));
  const order = ORDERS.find(([limit]) => smear_over_sigma / panels <= limit)?.[1] ?? 15;
  return panelled(phase_width, { panels, order });
}

/**
 * Gauss–Legendre points on equal panels of an exposure.
 *
 * @param phase_width Duration of the exposure, cycles.
 * @param options Number of panels and of points in each.
 * @returns Offsets and weights.
 *
 * @example
 * ```ts
 * import { panelled } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { weight } = panelled(0.1, { panels: 2, order: 3 });
 * assertAlmostEquals(weight.reduce((a, b) => a + b), 1, 1e-14);
 * ```
 */
export function panelled(
  phase_width: number,
  options: { readonly panels: number; readonly order: number },
): SmearingRule {
  const { panels, order } = options;
  const { nodes, weights } = gaussLegendre(order);
  const offset = new Float64Array(panels * order);
  const weight = new Float64Array(panels * order);
  for (let p = 0; p < panels; p++) {
    const middle = ((p + 0.5) / panels - 0.5) * phase_width;
    for (let k = 0; k < order; k++) {
      offset[p * order + k] = middle + (nodes[k] ?? 0) * 0.5 * phase_width / panels;
      weight[p * order + k] = (weights[k] ?? 0) / (2 * panels);
    }
  }
  return { offset, weight };
}
