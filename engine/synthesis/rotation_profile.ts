/**
 * Rotation kernel of a round star with linear limb darkening, as a density of unit area (Gray, *The
 * Observation and Analysis of Stellar Photospheres*). With ε = 0 it is also the projection of a
 * uniform disc in velocity space.
 *
 * @param x Velocity in units of v sin i.
 * @param limb_darkening ε of the linear law, in [0, 1].
 * @returns Share of the light per unit of x.
 *
 * @example
 * ```ts
 * import { rotationProfile } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(rotationProfile(0, 0), 2 / Math.PI, 1e-15);
 * ```
 */
export function rotationProfile(x: number, limb_darkening: number): number {
  const inside = (1 - x) * (1 + x);
  if (inside <= 0) return 0;
  const e = limb_darkening;
  return (2 * (1 - e) * Math.sqrt(inside) + Math.PI * e / 2 * inside) / (Math.PI * (1 - e / 3));
}

/**
 * Mean of the rotation kernel over a bin of velocity.
 *
 * @param bin Edges in x, the unit of {@linkcode rotationProfile}.
 * @param limb_darkening ε of the linear law, in [0, 1].
 * @returns Share of the light per unit of x.
 *
 * @example
 * ```ts
 * import { rotationBinMean } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(rotationBinMean([-1, 1], 0.6) * 2, 1, 1e-15);
 * ```
 */
export function rotationBinMean(
  bin: readonly [low: number, high: number],
  limb_darkening: number,
): number {
  const e = limb_darkening;
  const below = (edge: number) => {
    const x = Math.max(-1, Math.min(1, edge));
    const uniform = x * Math.sqrt(1 - x * x) + Math.asin(x);
    const darkened = Math.PI * e / 2 * (x - x ** 3 / 3);
    return ((1 - e) * uniform + darkened) / (Math.PI * (1 - e / 3));
  };
  return (below(bin[1]) - below(bin[0])) / (bin[1] - bin[0]);
}
