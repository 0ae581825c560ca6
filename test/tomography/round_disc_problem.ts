// A perfectly round disc between 330 and 620 km/s, with a spot on it or without, seen at few or many phases.
import { randomStream } from "@millrace/millrace/numerics";
import {
  featurePeaks,
  type InversionRecipe,
  makeInverter,
  makeProjector,
  mapExplainer,
  type MapFeature,
  mapFeatures,
  type MapPlace,
  resampleMaps,
  type TrailSamples,
} from "@millrace/millrace/tomography";
import { gaussianMap, plainSampling } from "./samplings.ts";

export const ROUND_SPOT = { vx_kms: -380, vy_kms: 190 } as const;

export interface RoundDiscProblem {
  readonly trail: TrailSamples;
  readonly shape: {
    readonly pixels: number;
    readonly half_width_kms: number;
    readonly systemic_kms: number;
  };
  readonly resolution_kms: number;
}

export interface RoundDiscOptions {
  /** Exposures, evenly over the orbit but for a ripple. */
  readonly exposures: number;
  /** Of the continuum per resolution element; the line peaks at about 1. */
  readonly signal_to_noise: number;
  readonly seed: number;
  /** Flux of the spot over that of the line. @default {0} */
  readonly spot?: number;
  /** Resolution of 41 in place of 82 km/s. @default {false} */
  readonly sharp?: boolean;
  /** Vy of the disc's centre, km/s. @default {0} */
  readonly centre_kms?: number;
}

const WIDTH_KMS = 900;

export function roundDiscProblem(options: RoundDiscOptions): RoundDiscProblem {
  const { exposures, signal_to_noise, seed, spot = 0, sharp = false, centre_kms = 0 } = options;
  const resolution_kms = sharp ? 41 : 82, step_kms = sharp ? 14 : 28;
  const shape = { pixels: sharp ? 81 : 41, half_width_kms: 800, systemic_kms: 12 };
  const pixel = 1600 / (shape.pixels - 1);
  const sampling = plainSampling({
    phases: Array.from({ length: exposures }, (_, i) => (i + 0.15 * Math.sin(5 * i)) / exposures),
    bins: 2240 / step_kms + 1,
    first_kms: -1120,
    step_kms,
    sigma_kms: 0.43 * resolution_kms,
    phase_width: 0.002,
  });
  const disc = Float64Array.from({ length: shape.pixels ** 2 }, (_, k) => {
    const vx = (k % shape.pixels) * pixel - 800, vy = Math.floor(k / shape.pixels) * pixel - 800;
    const v = Math.hypot(vx, vy - centre_kms);
    return 1 / ((1 + Math.exp(-(v - 330) / 25)) * (1 + Math.exp((v - 620) / 30)));
  });
  const flux = disc.reduce((a, b) => a + b, 0) * pixel ** 2;
  const { vx_kms: vx, vy_kms: vy } = ROUND_SPOT;
  const bright = gaussianMap(shape, [{ flux: spot * WIDTH_KMS, vx, vy, s1: 50, s2: 50 }]);
  const truth = disc.map((d, k) => (1 - spot) * WIDTH_KMS * d / flux + bright[k]!);
  const noise = Math.sqrt(resolution_kms / step_kms) / signal_to_noise;
  const random = randomStream(seed);
  const data = makeProjector(sampling, shape).forward(truth).map((f) =>
    f + noise * random.normal()
  );
  return {
    trail: { sampling, flux: data, error: data.map(() => noise) },
    shape,
    resolution_kms,
  };
}

/** The features of a map of it over 3 σ, as `map` states them, or as the map alone would have them. */
export async function claimedFeatures(
  problem: RoundDiscProblem,
  options: {
    readonly recipe: InversionRecipe;
    readonly replicas: number;
    readonly explained: boolean;
    readonly centre_error_kms?: MapPlace;
  },
): Promise<MapFeature[]> {
  const { trail, resolution_kms } = problem;
  const { recipe, replicas, explained, centre_error_kms } = options;
  const { map } = makeInverter(trail, recipe)(trail);
  const explain = explained ? mapExplainer(trail, { recipe, resolution_kms }) : null;
  const look = { resolution_kms, alone: explain && explain([]) };
  const peaks = featurePeaks(map, look);
  const spread = await resampleMaps(trail, { ...look, recipe, count: replicas, seed: 1, peaks });
  return mapFeatures(map, { resolution_kms, spread, explain, centre_error_kms, limit: 40 });
}

export function isSpot({ vx_kms, vy_kms }: MapPlace): boolean {
  return Math.hypot(vx_kms - ROUND_SPOT.vx_kms, vy_kms - ROUND_SPOT.vy_kms) < 82;
}
