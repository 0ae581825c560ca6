import { type Binary, keplerianSpeed } from "../binary/mod.ts";
import { radialLight } from "./disc_shape.ts";
import type { CompleteModel } from "./model_parameters.ts";
import { legendre } from "./quadrature.ts";

/** Gas at one radius of the disc. */
export interface DiscRing {
  /** Radius, a. */
  readonly radius_over_a: number;
  /** Projected speed of rotation, km/s. */
  readonly speed_kms: number;
  /** Equivalent width of the whole ring, km/s. */
  readonly light_kms: number;
  /** Standard deviation of turbulence, km/s. */
  readonly sigma_kms: number;
}

/** Nodes of the radial quadrature on each panel, and the panel's width in standard deviations. */
const POINTS = 16;
const PANEL_SIGMA = 8;

/** Standard deviation of turbulence at a radius, km/s. */
export function turbulence(disc: CompleteModel["disc"], radius_over_a: number): number {
  const { turbulence_kms, turbulence_index, outer_radius_over_a } = disc;
  if (turbulence_kms === 0) return 0;
  return turbulence_kms * (radius_over_a / outer_radius_over_a) ** -turbulence_index;
}

/** Least standard deviation with which any of the disc's gas is seen, instrument included, km/s. */
export function finestSigma(disc: CompleteModel["disc"], instrument_sigma_kms: number): number {
  const { inner_radius_over_a, outer_radius_over_a } = disc;
  const least = Math.min(
    turbulence(disc, inner_radius_over_a),
    turbulence(disc, outer_radius_over_a),
  );
  return Math.hypot(least, instrument_sigma_kms);
}

/** Half-width of the absorption core: the rim's speed times the angle under which it crosses the bright centre. */
function coreSpeed(disc: CompleteModel["disc"], binary: Binary): number {
  const { core_radius_over_a, outer_radius_over_a, keplerian_factor } = disc;
  const rim = keplerian_factor * keplerianSpeed(outer_radius_over_a, binary);
  return rim * core_radius_over_a / outer_radius_over_a;
}

/**
 * The disc as rings whose sum, seen with a Gaussian of at least `sigma_kms`, is the disc: a
 * Gauss–Legendre rule in the speed of rotation, so fine that the sum converges exponentially. With
 * `blend`, rings that turn so fast that this share of their speed exceeds the Gaussian are spread by
 * it: that bounds the number of rings, at 5e-5 of the profile's peak.
 */
export function discRings(
  disc: CompleteModel["disc"],
  binary: Binary,
  { sigma_kms, blend = 0 }: { readonly sigma_kms: number; readonly blend?: number },
): DiscRing[] {
  const { inner_radius_over_a, outer_radius_over_a, emissivity_index: beta } = disc;
  const rim = disc.keplerian_factor * keplerianSpeed(outer_radius_over_a, binary);
  const fastest = (inner_radius_over_a / outer_radius_over_a) ** -0.5;
  const scale = disc.equivalent_width_kms /
    radialLight([inner_radius_over_a / outer_radius_over_a, 1], beta);
  const { nodes, weights } = legendre(POINTS);
  const rings: DiscRing[] = [];
  for (let low = 1, high; low < fastest; low = high) {
    const spread = blend * rim * low > sigma_kms ? blend * rim * low : 0;
    high = Math.min(fastest, low + PANEL_SIGMA * Math.max(sigma_kms, spread) / rim);
    for (let k = 0; k < POINTS; k++) {
      const u = low + (high - low) * (1 + nodes[k]!) / 2;
      const radius_over_a = outer_radius_over_a * u ** -2;
      rings.push({
        radius_over_a,
        speed_kms: rim * u,
        // r = u^−2, so r^(1−β) dr is 2 u^(2β−5) du.
        light_kms: scale * weights[k]! * (high - low) * u ** (2 * beta - 5),
        sigma_kms: Math.hypot(turbulence(disc, radius_over_a), spread),
      });
    }
  }
  return rings;
}

/**
 * The absorption core of an opaque disc as rings of negative light. Cool gas at the rim, seen in
 * front of a bright round surface of the core's radius r_c, crosses it at −v to +v with v the rim's
 * speed times r_c over the rim's radius; a uniform surface then makes the half ellipse of a
 * rigidly turning disc.
 */
export function coreRings(
  disc: CompleteModel["disc"],
  binary: Binary,
  sigma_kms: number,
): DiscRing[] {
  const { core_equivalent_width_kms, core_radius_over_a, outer_radius_over_a } = disc;
  if (core_equivalent_width_kms === 0) return [];
  const speed = coreSpeed(disc, binary);
  const { nodes, weights } = legendre(POINTS);
  const panels = Math.ceil(speed / (PANEL_SIGMA * sigma_kms));
  const rings: DiscRing[] = [];
  for (let p = 0; p < panels; p++) {
    for (let k = 0; k < POINTS; k++) {
      const x = (p + (1 + nodes[k]!) / 2) / panels;
      rings.push({
        radius_over_a: core_radius_over_a * x,
        speed_kms: speed * x,
        light_kms: -core_equivalent_width_kms * weights[k]! / panels * x,
        sigma_kms: turbulence(disc, outer_radius_over_a),
      });
    }
  }
  return rings;
}

/**
 * Number of places around a ring whose sum, seen with a Gaussian of `sigma_kms`, is the ring: a
 * multiple of four, so that the places mirror one another.
 */
export function placesAround(
  ring: DiscRing,
  { sigma_kms, shear, harmonic }: {
    readonly sigma_kms: number;
    readonly shear: number;
    readonly harmonic: number;
  },
): number {
  const needed = Math.max(
    8 * Math.abs(ring.speed_kms) / Math.hypot(sigma_kms, ring.sigma_kms),
    24 * shear,
    24 + 8 * harmonic,
  );
  return 4 * Math.ceil(needed / 4);
}
