import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { kolmogorovSmirnov, randomStream } from "@millrace/millrace/numerics";
import {
  makeProjector,
  modulatedMap,
  modulatedProjector,
  modulationIn,
} from "@millrace/millrace/tomography";
import { gaussianMap, plainSampling, ragged } from "./samplings.ts";

const shape = { pixels: 41, half_width_kms: 750, systemic_kms: 0 };
const sampling = plainSampling({
  phases: Array.from({ length: 24 }, (_, i) => i / 24),
  bins: 71,
  first_kms: -1050,
  step_kms: 30,
  sigma_kms: 45,
});
const SPOT = gaussianMap(shape, [{ flux: 40, vx: -300, vy: 250, s1: 60, s2: 60 }]);
const DISC = gaussianMap(shape, [{ flux: 150, vx: 0, vy: -50, s1: 250, s2: 250 }]);
const seen = {
  spot: makeProjector(sampling, shape).forward(SPOT),
  disc: makeProjector(sampling, shape).forward(DISC),
};
const NOISE = 0.01;

function observed(amplitude: number, phase: number, seed: number) {
  const random = randomStream(seed);
  return {
    sampling,
    flux: seen.disc.map((f, k) => {
      const angle = 2 * Math.PI * (sampling.phase[Math.floor(k / 71)]! - phase);
      return f + seen.spot[k]! * (1 + amplitude * Math.cos(angle)) + NOISE * random.normal();
    }),
    error: seen.disc.map(() => NOISE),
  };
}
const REGION = { vx_kms: -300, vy_kms: 250, radius_kms: 170 };

Deno.test("modulatedProjector() has an exact transpose", () => {
  const random = randomStream(3);
  const projector = makeProjector(ragged(5, random.uniform), {
    pixels: 31,
    half_width_kms: 300,
    systemic_kms: 10,
  });
  const operator = modulatedProjector(projector);
  const image = Float64Array.from({ length: operator.image_size }, random.normal);
  const data = Float64Array.from({ length: operator.sample_count }, random.normal);
  const dot = (a: Float64Array, b: Float64Array) => a.reduce((s, x, k) => s + x * b[k]!, 0);
  const forward = operator.forward(image);
  const off = dot(forward, data) - dot(image, operator.adjoint(data));
  assertLess(Math.abs(off) / Math.sqrt(dot(forward, forward) * dot(data, data)), 1e-12);
});

Deno.test("modulatedMap() holds its amplitude below its average and finds a region's modulation", () => {
  const trail = observed(0.7, 0.3, 1);
  const before = structuredClone(trail);
  const maps = modulatedMap(trail, { ...shape, reduced_chi_square: 1.05 });
  assertEquals(trail, before);
  assertAlmostEquals(maps.reduced_chi_square, 1.05, 2e-3);
  maps.average.intensity.forEach((a, k) =>
    assert(Math.hypot(maps.cosine.intensity[k]!, maps.sine.intensity[k]!) <= a * (1 + 1e-12))
  );
  assert(maps.warnings.some((w) => w.code === "modulation-not-unique"));
  const found = modulationIn(trail, { maps, region: REGION, systemic_kms: 0 });
  // The region holds disc light too, about as much as spot: the amplitude is diluted by that.
  assertAlmostEquals(found.phase, 0.3, 0.04);
  assertGreater(found.amplitude, 0.25);
  assertLess(found.p_value!, 1e-6);
});

Deno.test("modulationIn() gives uniform probabilities on fixed emission, seeds 1 to 60", () => {
  const p: number[] = [];
  const maps = modulatedMap(observed(0, 0, 999), { ...shape, reduced_chi_square: 1.05 });
  for (let seed = 1; seed <= 60; seed++) {
    const found = modulationIn(observed(0, 0, seed), { maps, region: REGION, systemic_kms: 0 });
    p.push(found.p_value!);
  }
  assertGreater(kolmogorovSmirnov(p).probability, 1e-3);
});
