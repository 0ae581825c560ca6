import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertLess,
  assertRejects,
  assertThrows,
} from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  blockBootstrap,
  featurePeaks,
  type InversionRecipe,
  makeInverter,
  maximumEntropy,
  noiseReplica,
  resampleMaps,
} from "@millrace/millrace/tomography";
import { benchProblem } from "./bench_problem.ts";
import { ragged } from "./samplings.ts";

const { trail, shape } = benchProblem("small", { signal_to_noise: 30 });
const FAST: InversionRecipe = { inversion: "back-projection", ...shape };

Deno.test("resampleMaps() gives the same bits for one worker and for two, and leaves its trail alone", async () => {
  const before = structuredClone(trail);
  const found = maximumEntropy(trail, { ...shape, prior: { kind: "uniform" } });
  const recipe: InversionRecipe = {
    inversion: "entropy",
    ...shape,
    prior: { kind: "uniform" },
    multiplier: found.multiplier,
    start: found.map,
  };
  const peaks = featurePeaks(found.map, { resolution_kms: 60 }).slice(0, 3);
  const options = { recipe, count: 6, seed: 3, peaks, resolution_kms: 60 };
  const one = await resampleMaps(trail, options);
  const two = await resampleMaps(trail, { ...options, workers: 2 });
  assertEquals(one, two);
  assertEquals(trail, before);
  assertEquals(one.features.length, 3);
  assertEquals(one.features[0]!.vx_kms.length, 6);
});

Deno.test("resampleMaps() gives the mean and deviation of the maps one would make by hand", async () => {
  const spread = await resampleMaps(trail, { recipe: FAST, count: 90, seed: 7 });
  const invert = makeInverter(trail, FAST);
  const maps = Array.from(
    { length: 90 },
    (_, r) => invert({ ...trail, ...noiseReplica(trail, randomStream(7, r)) }).map.intensity,
  );
  for (const pixel of [0, 5000, 5151, 10200]) {
    const values = maps.map((m) => m[pixel]!);
    const mean = values.reduce((a, b) => a + b, 0) / 90;
    const deviation = Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2, 0) / 89);
    assertAlmostEquals(spread.mean.intensity[pixel]! / mean, 1, 1e-9);
    assertAlmostEquals(spread.deviation.intensity[pixel]! / deviation, 1, 1e-9);
  }
});

Deno.test("resampleMaps() reports progress up to the number of replicas", async () => {
  const seen: number[] = [];
  await resampleMaps(trail, {
    recipe: FAST,
    count: 5,
    seed: 1,
    progress: (done, total, what) => {
      assertEquals([total, what], [5, "replicas"]);
      seen.push(done);
    },
  });
  assertEquals(seen, [1, 2, 3, 4, 5]);
});

Deno.test("resampleMaps() refuses fewer than two replicas", async () => {
  const error = await assertRejects(
    () => resampleMaps(trail, { recipe: FAST, count: 1, seed: 1 }),
    InputError,
  );
  assertEquals(
    error.message,
    "Cannot resample maps as the number of replicas must be whole and at least 2: current value is 1 " +
      "(key map.resamples)",
  );
});

Deno.test("resampleMaps() by bootstrap scatters as by noise where the noise is what is stated", async () => {
  const noise = await resampleMaps(trail, { recipe: FAST, count: 60, seed: 2 });
  const bootstrap = await resampleMaps(trail, {
    recipe: { ...FAST, force: true } as InversionRecipe,
    count: 60,
    seed: 2,
    kind: "bootstrap",
    block: 1,
  });
  const rms = (m: Float64Array) => Math.sqrt(m.reduce((s, v) => s + v * v, 0) / m.length);
  const ratio = rms(bootstrap.deviation.intensity) / rms(noise.deviation.intensity);
  // A bootstrap of back-projection also scatters by the sampling of phases: never less than noise.
  assert(ratio > 0.9, `ratio ${ratio}`);
});

Deno.test("blockBootstrap() keeps the total weight, draws whole blocks and covers all exposures", () => {
  const random = randomStream(4);
  const sampling = {
    ...ragged(12, random.uniform),
    cycle: Float64Array.from({ length: 12 }, (_, i) => i % 3),
  };
  const data = {
    sampling,
    flux: sampling.velocity_kms.slice(),
    error: sampling.velocity_kms.map((_, k) => 1 + (k % 4)),
  };
  const drawn = new Uint32Array(12);
  for (let draw = 0; draw < 200; draw++) {
    const { error, flux } = blockBootstrap(data, { random, block: 3 });
    let total = 0;
    for (let i = 0; i < 12; i++) {
      const k = sampling.start[i]!;
      const times = Math.round((data.error[k]! / error[k]!) ** 2);
      drawn[i] = drawn[i]! + times;
      total += times;
    }
    assertEquals(total, 12);
    assertEquals(flux, data.flux);
  }
  // 200 draws of 12: each exposure is expected 200 times; five times the square root of 3 × 200.
  for (const times of drawn) assertAlmostEquals(times, 200, 5 * Math.sqrt(600));
  assertThrows(() => blockBootstrap(data, { random, block: 13 }), InputError);
});

Deno.test("makeInverter() holds the multiplier that its recipe states", () => {
  const found = maximumEntropy(trail, { ...shape, prior: { kind: "uniform" } });
  const invert = makeInverter(trail, {
    inversion: "entropy",
    ...shape,
    prior: { kind: "uniform" },
    multiplier: found.multiplier,
    start: found.map,
  });
  const again = invert({ ...trail, ...noiseReplica(trail, randomStream(9)) });
  // Noise on noise: chi-square goes up to nearly two, and must not be fitted down.
  assertLess(1.7, again.reduced_chi_square);
  assertLess(Math.abs(again.multiplier! / found.multiplier - 1), 0.15);
});
