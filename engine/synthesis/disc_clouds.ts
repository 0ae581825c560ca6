import type { Binary } from "../binary/mod.ts";
import { discPatterns } from "./disc_patterns.ts";
import { coreRings, type DiscRing, discRings, finestSigma, placesAround } from "./disc_rings.ts";
import { shearMean } from "./disc_shape.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { PointCloud } from "./point_cloud.ts";

/** Total variances within a cloud differ by at most this factor. */
const CLOUD_RATIO = 1.05;

/** Share of its speed by which a very fast ring may be spread. */
const BLEND = 0.01;

/** One point of the disc, before the points are gathered into clouds. */
interface DiscPoint {
  readonly x: number;
  readonly y: number;
  readonly vx: number;
  readonly vy: number;
  readonly light: number;
  readonly azimuth: number;
}

/**
 * The disc as points, each with its place: for eclipses, and for elliptical orbits, on which gas at
 * true anomaly f moves with V(1 + e cos f) along and V e sin f away from the accretor, V the speed
 * of the circular orbit of the same angular momentum (Statler 2001, AJ 122, 2257). One cloud for
 * each level of turbulence.
 */
export function discClouds(
  disc: CompleteModel["disc"],
  { binary, instrument_sigma_kms, shear }: {
    readonly binary: Binary;
    readonly instrument_sigma_kms: number;
    readonly shear: number;
  },
): PointCloud[] {
  const sigma_kms = finestSigma(disc, instrument_sigma_kms);
  const levels = new Map<number, { sigma_kms: number; shear: number; points: DiscPoint[] }>();
  const place = (rings: readonly DiscRing[], strength: number, pointsOf: RingPoints) => {
    for (const ring of rings) {
      const total = ring.sigma_kms ** 2 + instrument_sigma_kms ** 2;
      const level = Math.round(Math.log(total / sigma_kms ** 2) / Math.log(CLOUD_RATIO));
      const key = 2 * level + (strength > 0 ? 1 : 0);
      let cloud = levels.get(key);
      if (cloud === undefined) {
        cloud = { sigma_kms: ring.sigma_kms, shear: strength, points: [] };
        levels.set(key, cloud);
      }
      const count = placesAround(ring, {
        sigma_kms: instrument_sigma_kms,
        shear: strength,
        harmonic: 2,
      });
      for (const point of pointsOf(ring, count)) cloud.points.push(point);
    }
  };
  place(
    discRings(disc, binary, { sigma_kms, blend: BLEND }),
    shear,
    (ring, count) => gasOf(disc, binary, ring, count),
  );
  place(coreRings(disc, binary, sigma_kms), 0, (ring, count) => coreOf(binary, ring, count));
  return [...levels.values()].map((cloud) => cloudOf(cloud.points, cloud.sigma_kms, cloud.shear));
}

type RingPoints = (ring: DiscRing, count: number) => Generator<DiscPoint>;

/** Places around a ring of gas, on a circle or an ellipse. */
function* gasOf(
  disc: CompleteModel["disc"],
  binary: Binary,
  ring: DiscRing,
  count: number,
): Generator<DiscPoint> {
  const { eccentricity: e, emissivity_index: beta } = disc;
  const periastron = disc.periastron_deg * Math.PI / 180;
  const patterns = discPatterns(disc);
  const speed = ring.speed_kms / Math.sqrt(1 - e * e);
  // On ellipses light is shared out as radius^(2−β); its mean is taken out again.
  const shape = (f: number) => (1 - e * e) / (1 + e * Math.cos(f));
  let mean = 0;
  for (let k = 0; k < count; k++) {
    mean += shape((k + 0.5) * 2 * Math.PI / count - periastron) ** (2 - beta) / count;
  }
  for (let k = 0; k < count; k++) {
    const azimuth = (k + 0.5) * 2 * Math.PI / count;
    const f = azimuth - periastron;
    const radius = ring.radius_over_a * shape(f);
    const cos = Math.cos(azimuth), sin = Math.sin(azimuth);
    const along = speed * (1 + e * Math.cos(f)), away = speed * e * Math.sin(f);
    const bright = patterns.reduce(
      (sum, { order, amplitude, azimuth: crest }) =>
        sum + amplitude * Math.cos(order * (azimuth - crest(radius))),
      1,
    );
    yield {
      x: radius * cos,
      y: radius * sin,
      vx: away * cos - along * sin,
      vy: away * sin + along * cos - binary.k_accretor_kms,
      light: ring.light_kms / count * shape(f) ** (2 - beta) / mean * bright,
      azimuth,
    };
  }
}

/** The core's patch of bright surface, which it shadows, turning rigidly. */
function* coreOf(binary: Binary, ring: DiscRing, count: number): Generator<DiscPoint> {
  for (let k = 0; k < count; k++) {
    const azimuth = (k + 0.5) * 2 * Math.PI / count;
    const cos = Math.cos(azimuth), sin = Math.sin(azimuth);
    yield {
      x: ring.radius_over_a * cos,
      y: ring.radius_over_a * sin,
      vx: -ring.speed_kms * sin,
      vy: ring.speed_kms * cos - binary.k_accretor_kms,
      light: ring.light_kms / count,
      azimuth,
    };
  }
}

function cloudOf(points: readonly DiscPoint[], sigma_kms: number, shear: number): PointCloud {
  const column = (key: keyof DiscPoint) => Float64Array.from(points, (point) => point[key]);
  const sine = points.map(({ azimuth }) => Math.sin(2 * azimuth));
  const cosine = points.map(({ azimuth }) => Math.cos(2 * azimuth));
  const mean = shearMean(shear);
  return {
    vx_kms: column("vx"),
    vy_kms: column("vy"),
    light_kms: column("light"),
    sigma_kms,
    shift_kms: 0,
    place: { x: column("x"), y: column("y"), z: new Float64Array(points.length) },
    profile: null,
    brightness: shear === 0 ? null : (phase, share) => {
      const turn = 4 * Math.PI * phase;
      const c = Math.cos(turn), s = Math.sin(turn);
      for (let k = 0; k < share.length; k++) {
        // sin θ' cos θ' = ½ sin 2θ', θ' = θ + 2πφ.
        const both = 0.5 * shear * (sine[k]! * c + cosine[k]! * s);
        share[k]! *= Math.sqrt(1 + both * both) / mean;
      }
    },
  };
}
