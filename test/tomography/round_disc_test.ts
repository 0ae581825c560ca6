// Features that sampling, inversion and a wrong centre make of a disc that has none. Long form, with all
// inversions: test/bench/round_disc_claims.ts.
import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import {
  fitSimpleSources,
  makeProjector,
  mapFeatures,
  maximumEntropy,
} from "@millrace/millrace/tomography";
import { claimedFeatures, isSpot, ROUND_SPOT, roundDiscProblem } from "./round_disc_problem.ts";
import { gaussianMap } from "./samplings.ts";

const REPLICAS = 8, SEEDS = [1, 2, 3];

function backProjected(problem: ReturnType<typeof roundDiscProblem>) {
  return {
    recipe: { inversion: "back-projection", ...problem.shape } as const,
    replicas: REPLICAS,
  };
}

Deno.test("mapFeatures() claims nothing of a round disc at 12 exposures once its streaks are explained, seeds 1 to 3", async () => {
  let unexplained = 0;
  for (const seed of SEEDS) {
    const problem = roundDiscProblem({ exposures: 12, signal_to_noise: 100, seed });
    const how = backProjected(problem);
    unexplained += (await claimedFeatures(problem, { ...how, explained: false })).length;
    assertEquals(await claimedFeatures(problem, { ...how, explained: true }), []);
  }
  // The map alone has them: what is explained away is there.
  assertGreater(unexplained, SEEDS.length);
});

Deno.test("mapFeatures() finds a 10 % spot at 20 exposures, and none of the streaks it draws, seeds 1 to 3", async () => {
  for (const seed of SEEDS) {
    const problem = roundDiscProblem({ exposures: 20, signal_to_noise: 100, seed, spot: 0.1 });
    const how = backProjected(problem);
    const [spot, ...others] = await claimedFeatures(problem, { ...how, explained: true });
    assert(spot !== undefined && isSpot(spot));
    assertEquals(others, []);
    assertGreater((await claimedFeatures(problem, { ...how, explained: false })).length, 2);
  }
});

Deno.test("mapFeatures() explains the streaks of an entropy map of 6 exposures, too", async () => {
  const problem = roundDiscProblem({ exposures: 6, signal_to_noise: 100, seed: 1 });
  const { multiplier, level, map } = maximumEntropy(problem.trail, problem.shape);
  const held = { multiplier, level, start: map, max_iterations: 1000 };
  const recipe = { inversion: "entropy", ...problem.shape, ...held } as const;
  const claimed = (explained: boolean) =>
    claimedFeatures(problem, { recipe, replicas: 6, explained });
  assertGreater((await claimed(false)).length, 0);
  assertEquals(await claimed(true), []);
});

Deno.test("mapFeatures() does not take a disc about another centre for features within the centre's error", async () => {
  const about = { exposures: 24, signal_to_noise: 100, seed: 1, centre_kms: -40 };
  const problem = roundDiscProblem(about);
  const how = { ...backProjected(problem), explained: true };
  const sure = await claimedFeatures(problem, how);
  assertGreater(sure.length, 0);
  const centre_error_kms = { vx_kms: 0, vy_kms: 40 };
  assertEquals(await claimedFeatures(problem, { ...how, centre_error_kms }), []);
  // A spot stands out of the disc about any of these centres.
  const bright = roundDiscProblem({ ...about, spot: 0.1 });
  const [spot] = await claimedFeatures(bright, { ...how, centre_error_kms });
  assert(spot !== undefined && isSpot(spot));
});

Deno.test("mapFeatures() puts half of what centres an error to either side change into the errors", () => {
  const shape = { pixels: 81, half_width_kms: 1000 };
  const ring = gaussianMap(shape, [
    { flux: 60, vx: 0, vy: -80, s1: 350, s2: 350 },
    { flux: 8, vx: -300, vy: 150, s1: 60, s2: 60 },
  ]);
  const map = { ...shape, intensity: ring };
  const at = (vy_kms: number) =>
    mapFeatures(map, { resolution_kms: 60, centre: { vx_kms: 0, vy_kms } })[0]!;
  const scatter = (value: number) => Float64Array.of(value - 1, value + 1);
  const follow = {
    vx_kms: scatter(0),
    vy_kms: scatter(0),
    height: Float64Array.of(0, 1e-6),
    flux_fraction: Float64Array.of(0.1, 0.1),
  };
  const spread = { count: 2, mean: map, deviation: map, features: new Array(40).fill(follow) };
  const [found] = mapFeatures(map, {
    resolution_kms: 60,
    centre: { vx_kms: 0, vy_kms: -80 },
    centre_error_kms: { vx_kms: 0, vy_kms: 30 },
    spread,
    least_sigma: 0,
  });
  const low = at(-110), high = at(-50);
  const half = (key: "vx_kms" | "vy_kms" | "flux_fraction") => Math.abs(high[key] - low[key]) / 2;
  assertAlmostEquals(found!.vx_error_kms!, Math.hypot(Math.SQRT2, half("vx_kms")), 1e-9);
  assertAlmostEquals(found!.vy_error_kms!, Math.hypot(Math.SQRT2, half("vy_kms")), 1e-9);
  assertAlmostEquals(found!.flux_fraction_error!, half("flux_fraction"), 1e-12);
  assertGreater(half("flux_fraction"), 0);
});

Deno.test("fitSimpleSources() finds disc and spot with their fluxes, baselines and sign as the recipe has them", () => {
  const { trail, shape, resolution_kms } = roundDiscProblem({
    exposures: 12,
    signal_to_noise: 300,
    seed: 1,
    spot: 0.1,
  });
  const sum = (image: Float64Array) => image.reduce((a, b) => a + b, 0) * 40 ** 2;
  const fitted = (
    data: typeof trail,
    more: { readonly absorption?: boolean; readonly free_baselines?: boolean } = {},
  ) => {
    const recipe = { inversion: "entropy", ...shape, ...more } as const;
    const fit = fitSimpleSources(data, { recipe, resolution_kms });
    return { all: sum(fit([ROUND_SPOT])), disc: fit([]), both: fit([ROUND_SPOT]) };
  };
  const plain = fitted(trail);
  // The line's flux is known to 900/(S/N of some hundred samples); the edges of the disc fall within rings.
  assertAlmostEquals(plain.all / 900, 1, 0.01);
  const at = 24 * 41 + 10; // the pixel of the spot
  assertGreater(plain.both[at]!, 1.5 * plain.disc[at]!);
  // Chi-square of disc and spot together is that of the noise.
  const model = makeProjector(trail.sampling, shape).forward(plain.both);
  const square = model.reduce((s, m, k) => s + ((trail.flux[k]! - m) / trail.error[k]!) ** 2, 0);
  assertLess(square / model.length, 1.15);
  const turned = { ...trail, flux: trail.flux.map((f) => -f) };
  assertAlmostEquals(fitted(turned, { absorption: true }).all, plain.all, 1e-6);
  const raised = { ...trail, flux: trail.flux.map((f) => f + 0.1) };
  assertAlmostEquals(fitted(raised, { free_baselines: true }).all / 900, 1, 0.03);
});
