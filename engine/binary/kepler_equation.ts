import { InputError } from "../errors.ts";

/**
 * Eccentric anomaly by Kepler's equation M = E − e·sin E.
 *
 * @param mean_anomaly M, radians, any revolution.
 * @param eccentricity e in [0, 1).
 * @returns E, radians, in the revolution of M.
 * @throws {InputError} When the eccentricity is outside [0, 1).
 *
 * @example
 * ```ts
 * import { eccentricAnomaly } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const e = eccentricAnomaly(1, 0.3);
 * assertAlmostEquals(e - 0.3 * Math.sin(e), 1, 1e-15);
 * ```
 */
export function eccentricAnomaly(mean_anomaly: number, eccentricity: number): number {
  if (!(eccentricity >= 0 && eccentricity < 1)) {
    throw new InputError({
      action: "solve Kepler's equation",
      rule: "eccentricity must be at least 0 and below 1",
      value: eccentricity,
      key: "eccentricity",
    });
  }
  const turns = Math.round(mean_anomaly / (2 * Math.PI));
  const mean = mean_anomaly - 2 * Math.PI * turns;
  // The root lies within e of M; Newton's step is kept inside that bracket.
  let low = mean - eccentricity, high = mean + eccentricity;
  let anomaly = mean + eccentricity * Math.sin(mean);
  for (let k = 0; k < 60; k++) {
    const excess = anomaly - eccentricity * Math.sin(anomaly) - mean;
    if (excess > 0) high = anomaly;
    else low = anomaly;
    const newton = anomaly - excess / (1 - eccentricity * Math.cos(anomaly));
    const next = newton >= low && newton <= high ? newton : (low + high) / 2;
    if (Math.abs(next - anomaly) < 1e-15) return next + 2 * Math.PI * turns;
    anomaly = next;
  }
  return anomaly + 2 * Math.PI * turns;
}

/**
 * True anomaly, the angle from periastron as seen from the focus.
 *
 * @param mean_anomaly M, radians.
 * @param eccentricity e in [0, 1).
 * @returns Angle in (−π, π].
 * @throws {InputError} When the eccentricity is outside [0, 1).
 *
 * @example
 * ```ts
 * import { trueAnomaly } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(trueAnomaly(0.4, 0), 0.4, 1e-15);
 * ```
 */
export function trueAnomaly(mean_anomaly: number, eccentricity: number): number {
  const half = eccentricAnomaly(mean_anomaly, eccentricity) / 2;
  return 2 * Math.atan2(
        Math.sqrt(1 + eccentricity) * Math.sin(half),
        Math.sqrt(1 - eccentricity) * Math.cos(half),
      ) % (2 * Math.PI);
}
