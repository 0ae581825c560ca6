import { smearingRule } from "../tomography/mod.ts";
import type { CloudPlace } from "./cloud_place.ts";
import type { Occultation } from "./eclipse.ts";
import type { ExposureSamples } from "./emission.ts";
import {
  addTable,
  blur,
  deposit,
  emptyTable,
  POINTS_PER_SIGMA,
  REACH_SIGMA,
} from "./velocity_table.ts";

/** Light at N points of velocity space, whose brightness may depend on the phase. */
export interface PointCloud {
  /** Map coordinate, N values, km/s. */
  readonly vx_kms: Float64Array;
  /** Map coordinate, N values, km/s. */
  readonly vy_kms: Float64Array;
  /** Equivalent width of each point, N values, km/s. */
  readonly light_kms: Float64Array;
  /** Standard deviation of the velocities at each point, km/s. */
  readonly sigma_kms: number;
  /** Added to the velocity along the line of sight at every phase, km/s. */
  readonly shift_kms: number;
  /** Where the points are (a), for eclipses; null when the donor cannot hide them. */
  readonly place: CloudPlace | null;
  /** Multiplies `share` (N values) by the brightness at a phase; null when it is always 1. */
  readonly brightness: ((phase: number, share: Float64Array) => void) | null;
  /** Local line profile beside the Gaussian; null for the Gaussian alone. */
  readonly profile: LocalProfile | null;
}

/** A local profile as shares of light, which add up to one, at offsets in velocity. */
export interface LocalProfile {
  /** Offsets, km/s. */
  readonly offset_kms: Float64Array;
  /** Shares. */
  readonly share: Float64Array;
}

/** Up to this many points a Gaussian is computed for each; beyond, a table serves all. */
const FEW = 6;

/** Smear over σ that stands for brightness which varies gently, and in an eclipse, when instants are chosen. */
const GENTLE = 1;
const ABRUPT = 5;

/**
 * The function that adds a cloud to an exposure: each point on its S-wave
 * V = −Vx cos 2πφ + Vy sin 2πφ, seen through the exposure's profile and averaged over its duration.
 */
export function cloudAdder(
  cloud: PointCloud,
  occultation: Occultation | null,
): (exposure: ExposureSamples) => void {
  const { vx_kms, vy_kms, light_kms, sigma_kms, shift_kms, place, brightness, profile } = cloud;
  const count = light_kms.length;
  let fastest = 0;
  for (let k = 0; k < count; k++) fastest = Math.max(fastest, Math.hypot(vx_kms[k]!, vy_kms[k]!));
  const share = new Float64Array(count).fill(1);
  let reach = 0;
  for (let k = 0; k < (place?.x.length ?? 0); k++) {
    reach = Math.max(reach, Math.hypot(place!.x[k]!, place!.y[k]!, place!.z[k]!));
  }

  return ({ phase, phase_width, sigma_kms: instrument, velocity, from, to, into }) => {
    const sigma = Math.hypot(instrument, sigma_kms);
    const eclipsed = place !== null && occultation !== null &&
      occultation.mayHide(phase, phase_width, reach);
    const least = phase_width === 0 ? 0 : eclipsed ? ABRUPT : brightness === null ? 0 : GENTLE;
    const smear = 2 * Math.PI * phase_width * fastest / sigma;
    const { offset, weight } = smearingRule(phase_width, Math.max(smear, least));
    const direct = count <= FEW && profile === null;
    const table = direct ? null : emptyTable(sigma / POINTS_PER_SIGMA, fastest);
    for (let q = 0; q < offset.length; q++) {
      const at = phase + offset[q]!;
      const cos = Math.cos(2 * Math.PI * at), sin = Math.sin(2 * Math.PI * at);
      if (eclipsed || brightness !== null) share.fill(1);
      if (brightness !== null) brightness(at, share);
      if (eclipsed) occultation.hide(at, place, share);
      for (let k = 0; k < count; k++) {
        const light = weight[q]! * light_kms[k]! * share[k]!;
        if (light === 0) continue;
        const v = -vx_kms[k]! * cos + vy_kms[k]! * sin;
        if (table !== null) deposit(table, v, light);
        else addGaussian({ centre: v + shift_kms, sigma, light }, { velocity, from, to, into });
      }
    }
    if (eclipsed && brightness === null) share.fill(1);
    if (table === null) return;
    const blurred = blur(table, sigma);
    if (profile === null) {
      addTable(blurred, { velocity, from, to, shift: shift_kms, scale: 1, into });
      return;
    }
    for (let j = 0; j < profile.share.length; j++) {
      const shift = shift_kms + profile.offset_kms[j]!;
      addTable(blurred, { velocity, from, to, shift, scale: profile.share[j]!, into });
    }
  };
}

/** Adds a Gaussian of given light to samples within its reach. */
function addGaussian(
  { centre, sigma, light }: {
    readonly centre: number;
    readonly sigma: number;
    readonly light: number;
  },
  { velocity, from, to, into }: Pick<ExposureSamples, "velocity" | "from" | "to" | "into">,
): void {
  const peak = light / (Math.sqrt(2 * Math.PI) * sigma);
  const low = centre - REACH_SIGMA * sigma;
  const high = centre + REACH_SIGMA * sigma;
  let first = from, beyond = to;
  while (first < beyond) {
    const middle = (first + beyond) >> 1;
    if (velocity[middle]! < low) first = middle + 1;
    else beyond = middle;
  }
  for (let n = first; n < to && velocity[n]! <= high; n++) {
    const z = (velocity[n]! - centre) / sigma;
    into[n]! += peak * Math.exp(-0.5 * z * z);
  }
}
