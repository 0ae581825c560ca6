import { ballisticStream } from "./ballistic_stream.ts";
import type { Binary } from "./binary.ts";
import type { MapVelocity } from "./corotation.ts";
import {
  circularisationRadius,
  circularisationRadiusFromL1,
  resonanceRadius,
  tidalRadius,
} from "./disc_radii.ts";
import { donorDensity } from "./donor_density.ts";
import { keplerianSpeed } from "./keplerian_motion.ts";
import { lagrangePoints } from "./lagrange_points.ts";
import { lobeRadius, lobeRadiusEggleton } from "./lobe_radius.ts";
import { rimImpact } from "./rim_impact.ts";
import { donorMassFraction } from "./roche_potential.ts";

/** A binary of which at least the mass ratio is known. */
export type GeometryInput =
  & Pick<Binary, "mass_ratio">
  & { readonly [key in Exclude<keyof Binary, "mass_ratio" | "accretor">]?: Binary[key] | null };

/** Lobe, L1, stream and disc of a binary; what needs speeds or a scale is null without them. */
export interface Geometry {
  /** q = M2/M1. */
  readonly mass_ratio: number;
  /** Distance from the accretor to L1, a. */
  readonly l1_over_a: number;
  /** Distance from the accretor to the point beyond the donor, a. */
  readonly l2_over_a: number;
  /** Place of the point beyond the accretor, a, negative. */
  readonly l3_over_a: number;
  /** Donor's lobe: radius of the sphere of the same volume, a. */
  readonly lobe_radius_over_a: number;
  /** The same by Eggleton's (1983) formula, a. */
  readonly lobe_radius_eggleton_over_a: number;
  /** Accretor's lobe: radius of the sphere of the same volume, a. */
  readonly accretor_lobe_radius_over_a: number;
  /** Closest approach of the ballistic stream to the accretor, a. */
  readonly closest_approach_over_a: number;
  /** Circularisation radius from the stream's own angular momentum at closest approach, a. */
  readonly circularisation_radius_over_a: number;
  /** Circularisation radius from the angular momentum at L1, as in textbooks, a. */
  readonly circularisation_radius_from_l1_over_a: number;
  /** Tidal limit of the disc (Paczyński 1977; Warner 1995), a; null outside 0.03 < q < 1. */
  readonly tidal_radius_over_a: number | null;
  /** Radius of the 3:1 resonance (Whitehurst & King 1991), a. */
  readonly resonance_radius_over_a: number;
  /** Angle between the line from L1 to the accretor and the stream at its start, degrees. */
  readonly stream_angle_deg: number;
  /** Projected orbital speed of the donor, km/s. */
  readonly k_donor_kms: number | null;
  /** Projected orbital speed of the accretor, km/s. */
  readonly k_accretor_kms: number | null;
  /** Inclination, degrees. */
  readonly inclination_deg: number | null;
  /** Period, d. */
  readonly period_d: number | null;
  /** Mass of the accretor, solar. */
  readonly mass_accretor_msun: number | null;
  /** Mass of the donor, solar. */
  readonly mass_donor_msun: number | null;
  /** Separation, nominal solar radii. */
  readonly separation_rsun: number | null;
  /** Volume radius of the donor, which fills its lobe, nominal solar radii. */
  readonly donor_radius_rsun: number | null;
  /** Mean density of the donor, g/cm³. */
  readonly donor_density_g_cm3: number | null;
  /** Projected speed of rotation of the donor's equator, (K1+K2)·R2/a, km/s. */
  readonly donor_v_sin_i_kms: number | null;
  /** Map coordinates of L1 (as part of the donor). */
  readonly l1: MapVelocity | null;
  /** Keplerian speed at the tidal limit: least half-separation of a double peak, km/s. */
  readonly tidal_speed_kms: number | null;
  /** Keplerian speed at the stream's circularisation radius, km/s. */
  readonly circularisation_speed_kms: number | null;
  /** Impact on a rim at the tidal limit: the stream's velocity, map coordinates. */
  readonly tidal_impact_stream: MapVelocity | null;
  /** Impact on a rim at the tidal limit: Keplerian velocity, map coordinates. */
  readonly tidal_impact_keplerian: MapVelocity | null;
}

/**
 * The numbers that describe a binary's geometry, as the `geometry` command prints them.
 *
 * @param binary A binary, or a mass ratio with whatever else is known.
 * @returns The numbers; null for those that need a speed or a scale which is not known.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { describeGeometry } from "@millrace/millrace/binary";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const shape = describeGeometry({ mass_ratio: 0.2 });
 * assertAlmostEquals(shape.lobe_radius_eggleton_over_a / shape.lobe_radius_over_a, 1, 0.01);
 * assertEquals(shape.k_donor_kms, null);
 * ```
 */
export function describeGeometry(binary: GeometryInput): Geometry {
  const { mass_ratio, period_d = null, separation_rsun = null } = binary;
  const { k_accretor_kms = null, k_donor_kms = null } = binary;
  const points = lagrangePoints(mass_ratio);
  const stream = ballisticStream(mass_ratio, { points: 2 });
  const lobe_radius_over_a = lobeRadius(mass_ratio);
  const circle = circularisationRadius(stream);
  const tidal = tidalRadius(mass_ratio);
  const speeds = k_accretor_kms === null || k_donor_kms === null
    ? null
    : { mass_ratio, k_accretor_kms, k_donor_kms };
  const sum = speeds && speeds.k_accretor_kms + speeds.k_donor_kms;
  // The stream starts at L1: it cannot fall onto a rim beyond it.
  const impact = speeds && tidal && tidal < 0.99 * points.l1_over_a
    ? rimImpact(tidal, speeds)
    : null;
  return {
    mass_ratio,
    l1_over_a: points.l1_over_a,
    l2_over_a: points.l2_over_a,
    l3_over_a: points.l3_over_a,
    lobe_radius_over_a,
    lobe_radius_eggleton_over_a: lobeRadiusEggleton(mass_ratio),
    accretor_lobe_radius_over_a: lobeRadius(mass_ratio, { star: "accretor" }),
    closest_approach_over_a: stream.closest.radius_over_a,
    circularisation_radius_over_a: circle,
    circularisation_radius_from_l1_over_a: circularisationRadiusFromL1(mass_ratio),
    tidal_radius_over_a: tidal,
    resonance_radius_over_a: resonanceRadius(mass_ratio),
    stream_angle_deg: stream.launch_angle_deg,
    k_donor_kms,
    k_accretor_kms,
    inclination_deg: binary.inclination_deg ?? null,
    period_d,
    mass_accretor_msun: binary.mass_accretor_msun ?? null,
    mass_donor_msun: binary.mass_donor_msun ?? null,
    separation_rsun,
    donor_radius_rsun: separation_rsun && separation_rsun * lobe_radius_over_a,
    donor_density_g_cm3: period_d && donorDensity(period_d, mass_ratio, { lobe_radius_over_a }),
    donor_v_sin_i_kms: sum && sum * lobe_radius_over_a,
    l1: sum === null
      ? null
      : { vx_kms: 0, vy_kms: sum * (points.l1_over_a - donorMassFraction(mass_ratio)) },
    tidal_speed_kms: speeds && tidal && keplerianSpeed(tidal, speeds),
    circularisation_speed_kms: speeds && keplerianSpeed(circle, speeds),
    tidal_impact_stream: impact && impact.stream,
    tidal_impact_keplerian: impact && impact.keplerian,
  };
}
