// A small problem for coverage: a disc between 330 and 620 km/s with a 10 % spot, one orbit.
import { randomStream } from "@millrace/millrace/numerics";
import { makeProjector, mapFeatures, type TrailSamples } from "@millrace/millrace/tomography";
import { gaussianMap, plainSampling } from "./samplings.ts";

export const SPOT_PLACE = { vx: -380, vy: 190 } as const;

const shape = { pixels: 41, half_width_kms: 800, systemic_kms: 12 };
const sampling = plainSampling({
  phases: Array.from({ length: 30 }, (_, i) => (i + 0.15 * Math.sin(5 * i)) / 30),
  bins: 81,
  first_kms: -1120,
  step_kms: 28,
  sigma_kms: 35,
  phase_width: 0.002,
});
const DISC = Float64Array.from({ length: 41 * 41 }, (_, k) => {
  const v = Math.hypot((k % 41) * 40 - 800, Math.floor(k / 41) * 40 - 800);
  return 1 / ((1 + Math.exp(-(v - 330) / 25)) * (1 + Math.exp((v - 620) / 30)));
});
const WIDTH_KMS = 900;
const DISC_FLUX = DISC.reduce((a, b) => a + b, 0) * 1600;
const SPOT = gaussianMap(shape, [
  { flux: 0.1 * WIDTH_KMS, ...SPOT_PLACE, s1: 50, s2: 50 },
]);
const TRUTH = DISC.map((d, k) => 0.9 * WIDTH_KMS * d / DISC_FLUX + SPOT[k]!);
const CLEAN = makeProjector(sampling, shape).forward(TRUTH);

/** Where the spot stands out of the true map, by the measurement that is made on maps. */
export const SPOT_SEEN = mapFeatures({ ...shape, intensity: TRUTH }, { resolution_kms: 82 })
  .reduce((best, f) => apart(f) < apart(best) ? f : best);

function apart(f: { readonly vx_kms: number; readonly vy_kms: number }): number {
  return Math.hypot(f.vx_kms - SPOT_PLACE.vx, f.vy_kms - SPOT_PLACE.vy);
}

/** Signal to noise of the continuum per resolution element of 82 km/s; the line peaks at about 1. */
export function coverageProblem(options: {
  readonly signal_to_noise: number;
  readonly seed: number;
}): { trail: TrailSamples; shape: typeof shape; resolution_kms: number } {
  const noise = Math.sqrt(82 / 28) / options.signal_to_noise;
  const random = randomStream(options.seed);
  return {
    trail: {
      sampling,
      flux: CLEAN.map((f) => f + noise * random.normal()),
      error: CLEAN.map(() => noise),
    },
    shape,
    resolution_kms: 82,
  };
}
