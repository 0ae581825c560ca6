import { type Binary, keplerianSpeed } from "../binary/mod.ts";
import { mapStep, type VelocityMap } from "../tomography/mod.ts";
import { discPatterns } from "./disc_patterns.ts";
import { turbulence } from "./disc_rings.ts";
import { radialLight } from "./disc_shape.ts";
import { addBlurred } from "./map_light.ts";
import type { CompleteModel } from "./model_parameters.ts";

/** Places per side of a pixel at which the intensity is averaged: at an edge of the disc, and elsewhere. */
const AT_EDGE = 8;
const ELSEWHERE = 2;

/** Turbulence within a zone differs by at most this factor. */
const ZONE_RATIO = 1.1;

/** Adds the intensity of a circular, transparent disc: its mean over each pixel. */
export function addDiscToMap(
  map: VelocityMap,
  disc: CompleteModel["disc"],
  binary: Binary,
): void {
  const { inner_radius_over_a, outer_radius_over_a, emissivity_index: beta } = disc;
  const rim = disc.keplerian_factor * keplerianSpeed(outer_radius_over_a, binary);
  const patterns = discPatterns(disc);
  const scale = disc.equivalent_width_kms /
    (Math.PI * rim * rim * radialLight([inner_radius_over_a / outer_radius_over_a, 1], beta));

  // Light per du of a ring, 2 u^(2β−5), over its 2πu of circumference in velocity.
  const intensity = (u: number, azimuth: number) => {
    const bright = patterns.reduce((sum, { order, amplitude, azimuth: crest }) => {
      return sum + amplitude * Math.cos(order * (azimuth - crest(outer_radius_over_a * u ** -2)));
    }, 1);
    return scale * u ** (2 * beta - 6) * bright;
  };
  for (const [inner, outer] of zones(disc)) {
    const slow = (outer / outer_radius_over_a) ** -0.5,
      fast = (inner / outer_radius_over_a) ** -0.5;
    const source = annulus(map, {
      centre_vy_kms: -binary.k_accretor_kms,
      unit_kms: rim,
      slow,
      fast,
      intensity,
    });
    addBlurred(map, source, turbulence(disc, Math.sqrt(inner * outer)));
  }

  if (disc.core_equivalent_width_kms === 0) return;
  const speed = disc.core_radius_over_a / outer_radius_over_a;
  const depth = -disc.core_equivalent_width_kms / (Math.PI * (rim * speed) ** 2);
  const core = annulus(map, {
    centre_vy_kms: -binary.k_accretor_kms,
    unit_kms: rim,
    slow: 0,
    fast: speed,
    intensity: () => depth,
  });
  addBlurred(map, core, turbulence(disc, outer_radius_over_a));
}

/** Radii between which turbulence is nearly the same, outermost last. */
function zones(disc: CompleteModel["disc"]): [number, number][] {
  const { inner_radius_over_a: inner, outer_radius_over_a: outer } = disc;
  const change = Math.abs(Math.log(turbulence(disc, inner) / turbulence(disc, outer)));
  const count = Number.isFinite(change) ? Math.max(1, Math.ceil(change / Math.log(ZONE_RATIO))) : 1;
  const radius = (k: number) => inner * (outer / inner) ** (k / count);
  return Array.from({ length: count }, (_, k) => [radius(k), radius(k + 1)]);
}

/** Mean over each pixel of an intensity given by speed (in a unit) and azimuth in space (radians). */
function annulus(
  map: VelocityMap,
  { centre_vy_kms, unit_kms, slow, fast, intensity }: {
    readonly centre_vy_kms: number;
    readonly unit_kms: number;
    readonly slow: number;
    readonly fast: number;
    readonly intensity: (u: number, azimuth: number) => number;
  },
): Float64Array {
  const { pixels, half_width_kms } = map;
  const step = mapStep(map);
  const mean = new Float64Array(pixels * pixels);
  const corner = step / unit_kms / Math.SQRT2;
  for (let j = 0; j < pixels; j++) {
    for (let i = 0; i < pixels; i++) {
      const vx = i * step - half_width_kms, vy = j * step - half_width_kms - centre_vy_kms;
      const middle = Math.hypot(vx, vy) / unit_kms;
      if (middle + corner < slow || middle - corner > fast) continue;
      const edge = Math.abs(middle - slow) < corner || Math.abs(middle - fast) < corner;
      const side = edge ? AT_EDGE : ELSEWHERE;
      let sum = 0;
      for (let b = 0; b < side; b++) {
        for (let a = 0; a < side; a++) {
          const x = vx + ((a + 0.5) / side - 0.5) * step, y = vy + ((b + 0.5) / side - 0.5) * step;
          const u = Math.hypot(x, y) / unit_kms;
          // Gas at azimuth θ moves along (−sin θ, cos θ).
          if (u >= slow && u <= fast) sum += intensity(u, Math.atan2(-x, y));
        }
      }
      mean[j * pixels + i] = sum / (side * side);
    }
  }
  return mean;
}
