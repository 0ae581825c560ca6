import { type SpectralLine, spectralLines } from "../sky/mod.ts";
import type { VelocityRange } from "./continuum.ts";
import type { ObservedMask } from "./masks.ts";
import { lineVelocity } from "./velocity.ts";

/** Something that falls into a window about a line. */
export interface WindowContent {
  /** What the window is for. */
  readonly window: "line" | "continuum";
  /** The window, km/s about the line. */
  readonly window_kms: VelocityRange;
  /** What falls into it. */
  readonly name: string;
  /** "line" of the object itself, or "static" in the observer's frame. */
  readonly kind: "line" | "static";
  /** Velocity of its middle about the line, km/s. */
  readonly velocity_kms: number;
  /** What it takes of the window, km/s. */
  readonly range_kms: VelocityRange;
  /**
   * Radius of the ring that a static feature draws on a map, |velocity − systemic|, km/s; null for
   * lines of the object, and for bands broader than half the reach, whose features draw many.
   */
  readonly ring_radius_kms: number | null;
}

/** Options of {@linkcode windowContents}. */
export interface WindowContentsOptions {
  /** Velocities used on either side of the line, km/s. */
  readonly reach_kms: number;
  /** Windows of continuum, km/s about the line. */
  readonly continuum_kms: readonly VelocityRange[];
  /** Half width of a line of this object, km/s: its other lines are as wide. */
  readonly half_width_kms: number;
  /**
   * Static features in the observer's frame: sky lines, telluric bands.
   * @default []
   */
  readonly observed?: readonly ObservedMask[];
  /**
   * Barycentric over observer's wavelength.
   * @default 1
   */
  readonly observer_factor?: number;
  /**
   * Systemic velocity, km/s.
   * @default 0
   */
  readonly systemic_kms?: number;
}

/**
 * What falls into the windows about a line: other lines, as wide as the object's own, and features
 * that stand still in the observer's frame.
 *
 * @param line The line.
 * @param options Windows, width, static features.
 * @returns What falls into each, the line's own window first.
 *
 * @example He I 4922 stands at +3740 km/s from H beta
 * ```ts
 * import { windowContents } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * const found = windowContents(lineNamed("H beta"), {
 *   reach_kms: 2500,
 *   continuum_kms: [[-6000, -3000], [3000, 4500]],
 *   half_width_kms: 1000,
 * });
 * assertEquals(found.some((c) => c.window === "continuum" && Math.abs(c.velocity_kms - 3740) < 10), true);
 * ```
 */
export function windowContents(
  line: SpectralLine,
  options: WindowContentsOptions,
): WindowContent[] {
  const { reach_kms, continuum_kms, half_width_kms, systemic_kms = 0 } = options;
  const { observed = [], observer_factor = 1 } = options;
  const windows = [
    { window: "line" as const, window_kms: [-reach_kms, reach_kms] as VelocityRange },
    ...continuum_kms.map((window_kms) => ({ window: "continuum" as const, window_kms })),
  ];
  return windows.flatMap(({ window, window_kms }) => {
    const [low, high] = window_kms;
    const lines = spectralLines.flatMap((other): WindowContent[] => {
      const velocity_kms = lineVelocity(other.vacuum_angstrom, line);
      const isSelf = other.name === line.name || window === "line" && Math.abs(velocity_kms) < 50;
      const inside = velocity_kms + half_width_kms > low && velocity_kms - half_width_kms < high;
      return isSelf || !inside ? [] : [{
        window,
        window_kms,
        name: other.name,
        kind: "line",
        velocity_kms,
        range_kms: [
          Math.max(velocity_kms - half_width_kms, low),
          Math.min(velocity_kms + half_width_kms, high),
        ],
        ring_radius_kms: null,
      }];
    });
    const still = observed.flatMap((mask): WindowContent[] => {
      const from = lineVelocity(mask.low_angstrom * observer_factor, line);
      const to = lineVelocity(mask.high_angstrom * observer_factor, line);
      if (to < low || from > high) return [];
      const range_kms: VelocityRange = [Math.max(from, low), Math.min(to, high)];
      const velocity_kms = 0.5 * (range_kms[0] + range_kms[1]);
      return [{
        window,
        window_kms,
        name: mask.name,
        kind: "static",
        velocity_kms,
        range_kms,
        ring_radius_kms: to - from > 0.5 * reach_kms ? null : Math.abs(velocity_kms - systemic_kms),
      }];
    });
    return [...lines, ...still];
  });
}
