import { type DiscShape, radialLight, shearMean } from "./disc_shape.ts";
import { integrate } from "./quadrature.ts";

/**
 * Light of a disc of unit outer radius, ∫∫ j(r) [1 + κ² sin²θ cos²θ]^½ r dr dθ: the area under its
 * profile before it is normalised.
 *
 * @param disc The disc.
 * @returns Total for j(1) = 1.
 *
 * @example
 * ```ts
 * import { discTotal } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const total = discTotal({ inner_over_outer: 0.1, emissivity_index: 1 });
 * assertAlmostEquals(total, 2 * Math.PI * 0.9, 1e-12);
 * ```
 */
export function discTotal(disc: DiscShape): number {
  const { inner_over_outer, emissivity_index, shear = 0 } = disc;
  return 2 * Math.PI * shearMean(shear) * radialLight([inner_over_outer, 1], emissivity_index);
}
/**
 * Profile of a Keplerian disc without any instrument, as a density of unit area: Smak 1969, Acta
 * Astr. 19, 155 and 1981, Acta Astr. 31, 395 (optically thin); Horne & Marsh 1986, MNRAS 218, 761
 * (optically thick). By quadrature: slow and exact, the reference for {@linkcode synthesize}.
 *
 * @param u Velocity from the accretor's, in units of the Keplerian velocity at the outer edge
 * (projected by sin i). The profile is even in it, zero beyond the inner edge's, and has a cusp at
 * |u| = 1.
 * @param disc The disc.
 * @returns Share of the light per unit of u.
 *
 * @example The peaks stand at the velocity of the outer edge
 * ```ts
 * import { discProfile } from "@millrace/millrace/synthesis";
 * import { assert } from "@std/assert";
 *
 * const disc = { inner_over_outer: 0.1, emissivity_index: 1.5 };
 * assert(discProfile(1, disc) > discProfile(0.97, disc));
 * assert(discProfile(1, disc) > discProfile(1.03, disc));
 * ```
 */
export function discProfile(u: number, disc: DiscShape): number {
  const { inner_over_outer: inner, emissivity_index: beta, shear = 0 } = disc;
  const speed = Math.abs(u);
  const reach = Math.min(1, speed ** -2);
  if (!(reach > inner)) return 0;
  const total = discTotal(disc);
  const radial = 1.5 - beta;
  if (speed < 0.05) {
    const direct = (r: number) => {
      const along = speed * speed * r;
      return r ** radial * Math.sqrt((1 + shear * shear * along * (1 - along)) / (1 - along));
    };
    return 2 * integrate(direct, [inner, reach], { panels: 12 }) / total;
  }
  // r = u^−2 − s² takes away the root at the edge: 1 − u² r = u² s².
  const top = speed ** -2;
  const smooth = (s: number) => {
    const r = top - s * s;
    return r ** radial * Math.hypot(1, shear * speed * speed * s * Math.sqrt(r));
  };
  const limits = [Math.sqrt(top - reach), Math.sqrt(top - inner)] as const;
  return 4 / speed * integrate(smooth, limits, { panels: 12 }) / total;
}

/**
 * Mean of an optically thin disc's profile over a bin of velocity: what a pixel records, finite and
 * smooth where the profile itself has its cusp.
 *
 * @param bin Edges in u, the unit of {@linkcode discProfile}.
 * @param disc The disc; its `shear` must be absent or zero.
 * @returns Share of the light per unit of u.
 *
 * @example A bin that holds the whole line has its mean times its width equal to one
 * ```ts
 * import { discBinMean } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const mean = discBinMean([-4, 4], { inner_over_outer: 0.1, emissivity_index: 1.5 });
 * assertAlmostEquals(mean * 8, 1, 1e-12);
 * ```
 */
export function discBinMean(
  bin: readonly [low: number, high: number],
  disc: Omit<DiscShape, "shear">,
): number {
  return (discCumulative(bin[1], disc) - discCumulative(bin[0], disc)) / (bin[1] - bin[0]);
}

/** Share of a thin disc's light below u, less one half. */
function discCumulative(u: number, disc: Omit<DiscShape, "shear">): number {
  const { inner_over_outer: inner, emissivity_index: beta } = disc;
  const speed = Math.abs(u);
  if (speed === 0) return 0;
  const top = speed ** -2;
  if (top <= inner) return 0.5 * Math.sign(u);
  const reach = Math.min(1, top);
  const within = speed < 0.05
    ? integrate((r) => r ** (1 - beta) * Math.asin(speed * Math.sqrt(r)), [inner, reach], {
      panels: 12,
    })
    : integrate(
      (s) => 2 * s * (top - s * s) ** (1 - beta) * Math.acos(speed * s),
      [Math.sqrt(top - reach), Math.sqrt(top - inner)],
      { panels: 12 },
    );
  const beyond = reach < 1 ? radialLight([reach, 1], beta) * Math.PI / 2 : 0;
  return Math.sign(u) * (within + beyond) / (Math.PI * radialLight([inner, 1], beta));
}
