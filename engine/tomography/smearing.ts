import { gaussLegendre } from "../numerics/mod.ts";

/**
 * Largest L/σ for which 1, 2, 3… Gauss–Legendre points keep within 1e-4 of the smeared profile's peak, at
 * the corners of the map too, where the smear is √2 L.
 */
const LIMITS: readonly number[] = [
  ...[0.03, 0.43, 1.08, 1.81, 2.52, 3.24, 3.93, 4.62],
  ...[5.31, 5.99, 6.66, 7.33, 8, 8.67, 9.33, 9.99],
];

/** Offsets in phase and weights that stand for one exposure; the weights add up to one. */
export interface SmearingRule {
  /** Phase minus that of mid-exposure, cycles. */
  readonly offset: Float64Array;
  /** Weights, the same number of values. */
  readonly weight: Float64Array;
}

/**
 * Instants within an exposure whose mean stands for the whole exposure to 1e-4 of the profile's peak,
 * as few of them as that takes. The number of Gauss–Legendre points grows with L/σ, the smear over the
 * width of the instrumental profile; exposures with L/σ > 10 are cut into equal panels.
 *
 * @param phase_width Duration of the exposure, cycles.
 * @param smear_over_sigma L/σ: 2π × duration in cycles × half-width of the map, over σ.
 * @returns Offsets and weights.
 *
 * @example A short exposure is one instant
 * ```ts
 * import { smearingRule } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(smearingRule(0, 0).offset, Float64Array.of(0));
 * assertEquals(smearingRule(0.01, 4).offset.length, 8);
 * ```
 */
export function smearingRule(phase_width: number, smear_over_sigma: number): SmearingRule {
  const largest = LIMITS[LIMITS.length - 1]!;
  const panels = Math.max(1, Math.ceil(smear_over_sigma / largest));
  const order = 1 + LIMITS.findIndex((limit) => smear_over_sigma / panels <= limit);
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
