import { InputError } from "../errors.ts";

/** Star that a line follows. */
export type TracedStar = "accretor" | "donor";

/** Radial velocities of one line by one method, an exposure each. */
export interface VelocityCurve {
  /** Name of the line. */
  readonly line: string;
  /** How they were measured, as in "double-gaussian". */
  readonly method: string;
  /** The star whose motion they are meant to follow. */
  readonly star: TracedStar;
  /** Mid-exposure as orbits since the zero of the ephemeris (cycle + phase), N values. */
  readonly orbits: Float64Array;
  /** Duration of each exposure in orbits, N values. */
  readonly exposure_orbits: Float64Array;
  /** Velocity, N values, km/s, V/c = λ/λ0 − 1; NaN where not measured. */
  readonly velocity_kms: Float64Array;
  /** One standard deviation, N values, km/s; infinite where not measured. */
  readonly error_kms: Float64Array;
}

/** Fewest velocities from which an orbit may be fitted. */
export const FEWEST_VELOCITIES = 5;

/**
 * The measured exposures of a curve alone.
 *
 * @param curve A curve, perhaps with gaps.
 * @returns The same without exposures that were not measured.
 *
 * @example
 * ```ts
 * import { measuredOnly } from "@millrace/millrace/orbit";
 * import { assertEquals } from "@std/assert";
 *
 * const curve = {
 *   line: "H beta", method: "centroid", star: "accretor",
 *   orbits: Float64Array.of(0, 0.5), exposure_orbits: Float64Array.of(0.01, 0.01),
 *   velocity_kms: Float64Array.of(12, NaN), error_kms: Float64Array.of(3, Infinity),
 * } as const;
 * assertEquals(measuredOnly(curve).orbits, Float64Array.of(0));
 * ```
 */
export function measuredOnly(curve: VelocityCurve): VelocityCurve {
  const keep = (_: number, k: number) =>
    Number.isFinite(curve.velocity_kms[k]!) && Number.isFinite(curve.error_kms[k]!);
  return {
    ...curve,
    orbits: curve.orbits.filter(keep),
    exposure_orbits: curve.exposure_orbits.filter(keep),
    velocity_kms: curve.velocity_kms.filter(keep),
    error_kms: curve.error_kms.filter(keep),
  };
}

/**
 * Throws unless a curve has enough velocities, columns of one length and positive errors.
 *
 * @param curve The curve.
 * @param action What was being done, for the message.
 * @throws {InputError} Naming line and method.
 *
 * @example
 * ```ts
 * import { requireVelocities } from "@millrace/millrace/orbit";
 * import { assertThrows } from "@std/assert";
 *
 * const curve = {
 *   line: "H beta", method: "centroid", star: "accretor",
 *   orbits: new Float64Array(3), exposure_orbits: new Float64Array(3),
 *   velocity_kms: new Float64Array(3), error_kms: Float64Array.of(1, 1, 1),
 * } as const;
 * assertThrows(() => requireVelocities(curve, "fit orbit"), Error, "at least 5 velocities");
 * ```
 */
export function requireVelocities(curve: VelocityCurve, action: string): void {
  const what = `${curve.line} by ${curve.method}`;
  const count = curve.orbits.length;
  const columns = [curve.exposure_orbits, curve.velocity_kms, curve.error_kms];
  if (columns.some((column) => column.length !== count)) {
    throw new InputError({
      action,
      rule: `the columns of ${what} must have the length of its times, ${count}`,
      value: columns.map((column) => column.length),
    });
  }
  const bad = curve.error_kms.findIndex((error) => !(error > 0));
  if (bad >= 0) {
    throw new InputError({
      action,
      rule: `errors of ${what} must be positive`,
      value: curve.error_kms[bad],
      unit: "km/s",
      key: `exposure ${bad + 1}`,
    });
  }
  const usable = measuredOnly(curve).orbits.length;
  if (usable < FEWEST_VELOCITIES) {
    throw new InputError({
      action,
      rule: `it takes at least ${FEWEST_VELOCITIES} velocities (${what})`,
      value: usable,
      remedy: "add exposures, or use a line with more signal",
    });
  }
}

/**
 * Factor by which an exposure of finite length lowers the amplitude of a sinusoid: sin(πw)/(πw).
 *
 * @param exposure_orbits Duration w of the exposure, orbits.
 * @returns Factor, at most 1.
 *
 * @example
 * ```ts
 * import { smearFactor } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(smearFactor(0.1), 0.98363, 1e-5);
 * ```
 */
export function smearFactor(exposure_orbits: number): number {
  const angle = Math.PI * exposure_orbits;
  return angle === 0 ? 1 : Math.sin(angle) / angle;
}
