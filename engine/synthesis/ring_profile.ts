/**
 * Profile of a thin rotating ring without any instrument, as a density of unit area:
 * 1/(π √(1 − u²)), infinite at |u| = 1.
 *
 * @param u Velocity in units of the ring's (projected by sin i).
 * @returns Share of the light per unit of u.
 *
 * @example
 * ```ts
 * import { ringProfile } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(ringProfile(0), 1 / Math.PI, 1e-15);
 * ```
 */
export function ringProfile(u: number): number {
  return Math.abs(u) > 1 ? 0 : 1 / (Math.PI * Math.sqrt((1 - u) * (1 + u)));
}

/**
 * Mean of a ring's profile over a bin of velocity.
 *
 * @param bin Edges in u, the unit of {@linkcode ringProfile}.
 * @returns Share of the light per unit of u.
 *
 * @example
 * ```ts
 * import { ringBinMean } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(ringBinMean([-2, 2]) * 4, 1, 1e-15);
 * ```
 */
export function ringBinMean(bin: readonly [low: number, high: number]): number {
  const below = (u: number) => Math.asin(Math.max(-1, Math.min(1, u)));
  return (below(bin[1]) - below(bin[0])) / (Math.PI * (bin[1] - bin[0]));
}
