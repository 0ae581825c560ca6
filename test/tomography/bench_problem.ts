// The problem of the benchmarks: a disc between 380 and 800 km/s, an 8 % spot and a 3 % donor, on the geometry of
// test/bench/peers.py. Continuum 1; signal to noise is that of the continuum per resolution element
// of two bins; the line's equivalent width is 1200 km/s and it peaks at 1.9 above the continuum.
import { randomStream } from "@millrace/millrace/numerics";
import { makeProjector, type Projector, type TrailSamples } from "@millrace/millrace/tomography";
import { benchSampling, gaussianMap, type SIZES } from "./samplings.ts";

export interface BenchProblem {
  readonly projector: Projector;
  readonly shape: {
    readonly pixels: number;
    readonly half_width_kms: number;
    readonly systemic_kms: number;
  };
  readonly truth: Float64Array;
  readonly trail: TrailSamples;
  readonly noise: number;
}

export const SPOT = { vx: -420, vy: 180 } as const;

export function benchProblem(
  size: keyof typeof SIZES,
  options: {
    readonly signal_to_noise: number;
    readonly seed?: number;
    readonly spot?: number;
  },
): BenchProblem {
  const { signal_to_noise, seed = 1, spot = 0.08 } = options;
  const { sampling, pixels } = benchSampling(size);
  const shape = { pixels, half_width_kms: 1000, systemic_kms: 13.7 };
  const projector = makeProjector(sampling, shape);
  const truth = benchMap(shape, { spot });
  const noise = Math.SQRT2 / signal_to_noise;
  const random = randomStream(seed);
  const flux = projector.forward(truth).map((f) => f + noise * random.normal());
  return {
    projector,
    shape,
    truth,
    trail: { sampling, flux, error: flux.map(() => noise) },
    noise,
  };
}

function benchMap(
  shape: { readonly pixels: number; readonly half_width_kms: number },
  { spot }: { readonly spot: number },
): Float64Array {
  const { pixels, half_width_kms } = shape;
  const step = 2 * half_width_kms / (pixels - 1);
  const width_kms = 1200;
  const disc = new Float64Array(pixels * pixels);
  let sum = 0;
  for (let k = 0; k < disc.length; k++) {
    const v = Math.hypot(
      (k % pixels) * step - half_width_kms,
      Math.floor(k / pixels) * step - half_width_kms + 60,
    );
    disc[k] = Math.exp(-Math.max(0, v - 380) / 300) /
      ((1 + Math.exp(-(v - 380) / 25)) * (1 + Math.exp((v - 800) / 25)));
    sum += disc[k]! * step * step;
  }
  const compact = gaussianMap(shape, [
    { flux: spot * width_kms, vx: SPOT.vx, vy: SPOT.vy, s1: 50, s2: 50 },
    { flux: 0.03 * width_kms, vx: 0, vy: 300, s1: 40, s2: 40 },
  ]);
  return disc.map((d, k) => d * (0.97 - spot) * width_kms / sum + compact[k]!);
}
