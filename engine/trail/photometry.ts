import { InputError } from "../errors.ts";
import { daysBetween, type SplitDate } from "../sky/mod.ts";

/** Brightness against time, taken beside the spectra. */
export interface Photometry {
  /** Times, BJD(TDB), M values, increasing. */
  readonly time: readonly SplitDate[];
  /** Flux on any linear scale, M values, positive. */
  readonly flux: Float64Array;
  /**
   * Whose brightness it is. "target": each exposure is scaled to it. "companion": a star on the
   * same slit; what it loses the target loses, so each exposure is divided by it.
   */
  readonly of: "target" | "companion";
}

/**
 * Brightness during an exposure: the mean of the photometry within it where there are points, else
 * linear between the points beside it.
 *
 * @param photometry The light curve.
 * @param exposure Mid-exposure and duration.
 * @returns The brightness, or null when the exposure lies outside the light curve.
 * @throws {InputError} When times and fluxes differ in number or times do not increase.
 *
 * @example
 * ```ts
 * import { brightnessDuring } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const photometry = { time: [[2460311, 0], [2460311, 0.5]] as const, flux: Float64Array.of(1, 3), of: "target" as const };
 * assertAlmostEquals(brightnessDuring(photometry, { mid: [2460311, 0.25], exposure_s: 60 })!, 2);
 * ```
 */
export function brightnessDuring(
  photometry: Photometry,
  exposure: { readonly mid: SplitDate; readonly exposure_s: number },
): number | null {
  const { time, flux } = photometry;
  if (time.length !== flux.length) {
    throw new InputError({
      action: "read photometry",
      rule: "there must be one flux a time",
      value: `${time.length} times, ${flux.length} fluxes`,
    });
  }
  const days = time.map((t) => daysBetween(t, exposure.mid));
  const backwards = days.findIndex((d, i) => i > 0 && !(d > days[i - 1]!));
  if (backwards >= 0) {
    throw new InputError({
      action: "read photometry",
      rule: "times must increase",
      value: `point ${backwards + 1} is not after point ${backwards}`,
    });
  }
  const half = exposure.exposure_s / 172800;
  const inside = [...flux].filter((_, i) => Math.abs(days[i]!) <= half);
  if (inside.length > 0) return inside.reduce((sum, f) => sum + f, 0) / inside.length;
  const after = days.findIndex((d) => d > 0);
  if (after <= 0) return null;
  const w = -days[after - 1]! / (days[after]! - days[after - 1]!);
  return flux[after - 1]! * (1 - w) + flux[after]! * w;
}
