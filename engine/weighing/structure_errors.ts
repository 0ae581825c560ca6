import type { Binary } from "../binary/mod.ts";
import type { RandomStream } from "../numerics/mod.ts";
import type { GeometryErrors } from "./fit_setup.ts";

/** Errors of the geometry, as far as places and structures in a map depend on them. */
export interface StructureErrors extends GeometryErrors {
  /** Of the inclination, degrees, where the speeds were derived with it. */
  readonly inclination_deg?: number;
  /** Of the rest wavelength, as a velocity, km/s, where `systemic_kms` does not hold it. */
  readonly rest_kms?: number;
}

/**
 * A binary drawn from what is known: speeds and mass ratio normal, none below a twentieth of its
 * value. An error of the inclination scales both speeds.
 *
 * @param binary The binary.
 * @param options Errors and the stream.
 * @returns Another binary.
 */
export function drawBinary(
  binary: Binary,
  { errors, random }: { readonly errors: StructureErrors; readonly random: RandomStream },
): Binary {
  const draw = (value: number, error = 0) =>
    Math.max(0.05 * value, value + error * random.normal());
  let tilt = 1;
  const { inclination_deg } = binary;
  if (errors.inclination_deg !== undefined && inclination_deg !== null) {
    const radians = Math.PI / 180;
    const other = Math.min(90, draw(inclination_deg, errors.inclination_deg));
    tilt = Math.sin(other * radians) / Math.sin(inclination_deg * radians);
  }
  const k_donor_kms = tilt * draw(binary.k_donor_kms, errors.k_donor_kms);
  const k_accretor_kms = tilt * draw(binary.k_accretor_kms, errors.k_accretor_kms);
  const mass_ratio = errors.mass_ratio === undefined
    ? binary.mass_ratio * k_accretor_kms / binary.k_accretor_kms /
      (k_donor_kms / binary.k_donor_kms)
    : draw(binary.mass_ratio, errors.mass_ratio);
  return { ...binary, k_donor_kms, k_accretor_kms, mass_ratio };
}

/** A place in the map with its covariance, (km/s)². */
export interface UncertainPlace {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** Covariance. */
  readonly covariance: readonly [xx: number, xy: number, yy: number];
}

/**
 * Adds to a place's noise what the zero of phase and the systemic velocity (with the rest
 * wavelength) may be wrong by. A wrong zero turns the map by 2πδ; a wrong γ pulls the place by what a
 * constant velocity looks like at the phases that were observed, which is nothing when they are
 * evenly spread.
 *
 * @param place The place, with its covariance by noise alone.
 * @param options Errors, and the phases of the exposures.
 * @returns The place with the whole covariance.
 *
 * @example A wrong zero of phase moves a place along the circle
 * ```ts
 * import { placeErrors } from "@millrace/millrace/weighing";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const phases = [0, 0.25, 0.5, 0.75];
 * const place = { vx_kms: 0, vy_kms: 500, covariance: [0, 0, 0] } as const;
 * const { covariance: [xx, , yy] } = placeErrors(place, { errors: { phase: 0.01 }, phases });
 * assertAlmostEquals(Math.sqrt(xx), 500 * 2 * Math.PI * 0.01, 1e-9);
 * assertAlmostEquals(yy, 0, 1e-9);
 * ```
 */
export function placeErrors(
  place: UncertainPlace,
  { errors, phases }: { readonly errors: StructureErrors; readonly phases: ArrayLike<number> },
): UncertainPlace {
  const { vx_kms, vy_kms } = place;
  let [xx, xy, yy] = place.covariance;
  const turn = 2 * Math.PI * (errors.phase ?? 0);
  xx += (turn * vy_kms) ** 2;
  xy -= turn ** 2 * vx_kms * vy_kms;
  yy += (turn * vx_kms) ** 2;

  // Least squares of a constant on (−cos, sin).
  let cc = 0, cs = 0, ss = 0, c = 0, s = 0;
  for (let i = 0; i < phases.length; i++) {
    const cosine = -Math.cos(2 * Math.PI * phases[i]!), sine = Math.sin(2 * Math.PI * phases[i]!);
    cc += cosine * cosine;
    cs += cosine * sine;
    ss += sine * sine;
    c += cosine;
    s += sine;
  }
  const determinant = cc * ss - cs * cs;
  const variance = (errors.systemic_kms ?? 0) ** 2 + (errors.rest_kms ?? 0) ** 2;
  if (determinant > 1e-9 * cc * ss) {
    const x = (ss * c - cs * s) / determinant, y = (cc * s - cs * c) / determinant;
    xx += variance * x * x;
    xy += variance * x * y;
    yy += variance * y * y;
  }
  return { vx_kms, vy_kms, covariance: [xx, xy, yy] };
}
