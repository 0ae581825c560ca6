import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  blendProjector,
  makeProjector,
  scanBlendRatio,
  scanParameter,
  scanPeriod,
  scanSystemic,
} from "@millrace/millrace/tomography";
import { gaussianMap, plainSampling } from "./samplings.ts";

const shape = { pixels: 31, half_width_kms: 600 };
const MAP = gaussianMap(shape, [
  { flux: 40, vx: -250, vy: 150, s1: 60, s2: 60 },
  { flux: 100, vx: 0, vy: -40, s1: 200, s2: 200 },
]);
const NOISE = 0.01;

function samplingOf(phases: readonly number[]) {
  return plainSampling({ phases, bins: 61, first_kms: -1050, step_kms: 35, sigma_kms: 50 });
}

function noisy(clean: Float64Array, seed: number) {
  const random = randomStream(seed);
  return {
    flux: clean.map((f) => f + NOISE * random.normal()),
    error: clean.map(() => NOISE),
  };
}
const ONE_ORBIT = Array.from({ length: 20 }, (_, i) => i / 20);

Deno.test("scanParameter() finds minimum and width, and tells flat, edge and several from a minimum", () => {
  const scan = scanParameter((x) => 5 + ((x - 1.3) / 0.4) ** 2, [0, 0.5, 1.1, 2, 4]);
  assertAlmostEquals(scan.best!, 1.3, 1e-12);
  assertAlmostEquals(scan.error!, 0.4, 1e-12);
  assertAlmostEquals(scan.least, 5, 1e-12);
  assertEquals(scan.shape, "minimum");
  assertEquals(scanParameter((x) => 0.1 * x * x, [-1, 0, 1]).shape, "flat");
  assertEquals(scanParameter((x) => 3 * x, [0, 1, 2]).shape, "edge");
  const two = scanParameter((x) => 3 * (x * x - 4) ** 2 + 0.5 * x, [-3, -2, -1, 0, 1, 2, 3]);
  assertEquals(two.shape, "several");
  const error = assertThrows(() => scanParameter(() => 0, [1, 1, 2]), InputError);
  assertEquals(error.message, "Cannot scan as values must increase: current value is 1");
});

Deno.test("scanSystemic() finds the systemic velocity within its error", () => {
  const sampling = samplingOf(ONE_ORBIT);
  const clean = makeProjector(sampling, { ...shape, systemic_kms: 35 }).forward(MAP);
  let pull = 0;
  for (let seed = 1; seed <= 4; seed++) {
    const scan = scanSystemic({ sampling, ...noisy(clean, seed) }, {
      ...shape,
      values_kms: [20, 25, 30, 35, 40, 45, 50],
      reduced_chi_square: 1.03,
    });
    assertEquals(scan.shape, "minimum");
    pull += ((scan.best! - 35) / scan.error!) ** 2;
  }
  // Four pulls of unit scatter: 99.9 % of the sum of their squares lies below 18.5.
  assertLess(pull, 18.5);
});

Deno.test("scanPeriod() finds the period on two nights and none on one", () => {
  const nights = [...ONE_ORBIT, ...ONE_ORBIT.map((p) => p + 40)];
  const sampling = samplingOf(nights);
  const clean = makeProjector(sampling, { ...shape, systemic_kms: 0 }).forward(MAP);
  // The ephemeris' period is too long by 2e-4: after 40 orbits phases are off by 0.008.
  const wrong = nights.map((o) => o / 1.0002);
  const observed = { sampling: samplingOf(wrong), ...noisy(clean, 1) };
  const options = { ...shape, systemic_kms: 0, reduced_chi_square: 1.03 };
  const ratios = [-6, -4, -2, 0, 2, 4].map((x) => 1 + 1e-4 * x);
  const scan = scanPeriod(observed, { ...options, ratios });
  assertEquals(scan.shape, "minimum");
  assertAlmostEquals(scan.best!, 1 / 1.0002, 4 * scan.error!);
  assertLess(scan.error!, 1e-4);
  const single = samplingOf(ONE_ORBIT);
  const night = {
    sampling: single,
    ...noisy(makeProjector(single, { ...shape, systemic_kms: 0 }).forward(MAP), 2),
  };
  // One orbit alone: the curve only drifts, by less than 1 between values.
  assert(scanPeriod(night, { ...options, ratios }).error === null);
});

Deno.test("scanBlendRatio() finds the ratio of a blend's member", () => {
  const sampling = samplingOf(ONE_ORBIT);
  const rest_ratio = 1 + 400 / 299792.458;
  const clean = blendProjector(sampling, {
    ...shape,
    systemic_kms: 0,
    members: [{ rest_ratio, flux_ratio: 0.4 }],
  }).forward(MAP);
  const scan = scanBlendRatio({ sampling, ...noisy(clean, 1) }, {
    ...shape,
    systemic_kms: 0,
    member_rest_ratio: rest_ratio,
    flux_ratios: [0.3, 0.35, 0.4, 0.45, 0.5],
    reduced_chi_square: 1.03,
  });
  assertEquals(scan.shape, "minimum");
  assertAlmostEquals(scan.best!, 0.4, 4 * scan.error!);
  assert(scan.error! < 0.05);
});
