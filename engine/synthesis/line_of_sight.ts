import { lagrangePoints, type Place, rochePotential } from "../binary/mod.ts";

/** Options of {@linkcode isOcculted}. */
export interface OccultationOptions {
  /** q = M2/M1. */
  readonly mass_ratio: number;
  /** Inclination, degrees. */
  readonly inclination_deg: number;
  /** Orbital phase, cycles; 0 is the donor's inferior conjunction. */
  readonly phase: number;
  /**
   * Number of places along the line of sight at which the potential is looked at.
   *
   * @default {4000}
   */
  readonly steps?: number;
}

/**
 * Whether a Roche-filling donor hides a place from the observer: the line of sight is followed in
 * small steps through the sphere about the donor that reaches L1, and the potential looked up at
 * each. Slow and obvious: the reference for the eclipse in {@linkcode synthesize}.
 *
 * @param place The place, in units of the separation, origin at the accretor; outside the donor.
 * @param options The binary, where it is seen from, and when.
 * @returns True when it is hidden.
 *
 * @example Seen edge-on, the accretor is hidden at mid-eclipse and not half an orbit later
 * ```ts
 * import { isOcculted } from "@millrace/millrace/synthesis";
 * import { assertEquals } from "@std/assert";
 *
 * const accretor = { x: 0, y: 0 };
 * const view = { mass_ratio: 0.3, inclination_deg: 85 };
 * assertEquals(isOcculted(accretor, { ...view, phase: 0 }), true);
 * assertEquals(isOcculted(accretor, { ...view, phase: 0.5 }), false);
 * ```
 */
export function isOcculted(place: Place, options: OccultationOptions): boolean {
  const { mass_ratio, inclination_deg, phase, steps = 4000 } = options;
  const { l1_over_a, l1_potential } = lagrangePoints(mass_ratio);
  const radius = 1 - l1_over_a;
  const i = inclination_deg * Math.PI / 180;
  const angle = 2 * Math.PI * phase;
  const n = [Math.sin(i) * Math.cos(angle), -Math.sin(i) * Math.sin(angle), Math.cos(i)] as const;
  const { x, y, z = 0 } = place;
  const foot = -((x - 1) * n[0] + y * n[1] + z * n[2]);
  const away = (x - 1) ** 2 + y * y + z * z - foot * foot;
  if (away >= radius * radius) return false;
  const half = Math.sqrt(radius * radius - away);
  for (let k = 0; k < steps; k++) {
    const s = foot + half * (2 * (k + 0.5) / steps - 1);
    if (s <= 0) continue;
    const at = { x: x + s * n[0], y: y + s * n[1], z: z + s * n[2] };
    if (rochePotential(at, mass_ratio) < l1_potential) return true;
  }
  return false;
}
