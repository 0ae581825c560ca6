import { SOLAR_RADIUS_M } from "../constants.ts";
import type { Binary } from "../binary/mod.ts";

/** Gravitational radius GM/c² of a solar mass, km: IAU nominal GM over c². */
const SOLAR_GRAVITATIONAL_KM = 1.476625;

/** Usual radius of a neutron star, km (common practice, no source). */
const NEUTRON_STAR_KM = 12;

/** Mass at which a white dwarf has no radius left, solar: 5.816/μ_e² with two nucleons an electron. */
const LIMIT_MSUN = 1.454;

/**
 * Smallest radius at which gas can circle the accretor: a white dwarf's surface by the mass-radius
 * relation of Nauenberg (1972, ApJ 175, 417; coefficients from memory), a neutron star's of 12 km, or the last stable orbit
 * of a black hole that does not spin, 6GM/c².
 *
 * @param binary The binary.
 * @returns Radius in units of the separation and what it is; null when mass or separation is unknown.
 */
export function accretorRadius(binary: Binary): { over_a: number; what: string } | null {
  const { mass_accretor_msun: mass, separation_rsun, accretor } = binary;
  if (mass === null || separation_rsun === null) return null;
  const separation_km = separation_rsun * SOLAR_RADIUS_M.value / 1000;
  if (accretor === "neutron-star") {
    return { over_a: NEUTRON_STAR_KM / separation_km, what: "the neutron star's surface" };
  }
  if (accretor === "black-hole") {
    const orbit_km = 6 * SOLAR_GRAVITATIONAL_KM * mass;
    return { over_a: orbit_km / separation_km, what: "the black hole's last stable orbit" };
  }
  const x = (mass / LIMIT_MSUN) ** (2 / 3);
  if (!(x < 1)) return null;
  const radius_rsun = 0.01125 * Math.sqrt(1 / x - x);
  return { over_a: radius_rsun / separation_rsun, what: "the white dwarf's surface" };
}
