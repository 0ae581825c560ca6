import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { randomStream } from "@millrace/millrace/numerics";
import {
  bestPositiveMap,
  crossValidate,
  featureBias,
  featurePeaks,
  insideOutMap,
  insideOutOperator,
  type InversionRecipe,
  makeInverter,
  makeProjector,
  maximumEntropy,
  pointResponses,
  samplingStructures,
  separateMaps,
  separateProjector,
} from "@millrace/millrace/tomography";
import { gaussianMap, plainSampling } from "./samplings.ts";

const shape = { pixels: 61, half_width_kms: 750, systemic_kms: 0 };

function observed(
  phases: readonly number[],
  { map, noise, seed = 1, phase_width = 0 }: {
    readonly map: Float64Array;
    readonly noise: number;
    readonly seed?: number;
    readonly phase_width?: number;
  },
) {
  const sampling = plainSampling({
    phases,
    bins: 91,
    first_kms: -1125,
    step_kms: 25,
    sigma_kms: 30,
    phase_width,
  });
  const random = randomStream(seed);
  const flux = makeProjector(sampling, shape).forward(map).map((f) => f + noise * random.normal());
  return { sampling, flux, error: flux.map(() => noise) };
}
const EVEN = Array.from({ length: 30 }, (_, i) => i / 30);
const DISC = gaussianMap(shape, [{ flux: 200, vx: 0, vy: 0, s1: 250, s2: 250 }]);
const BACK: InversionRecipe = { inversion: "back-projection", ...shape };

Deno.test("pointResponses() is round for even phases and stretched where phases are missing", () => {
  const even = observed(EVEN, { map: DISC, noise: 1e-3 });
  const places = [{ vx_kms: 250, vy_kms: 0 }];
  const [round] = pointResponses(even, {
    recipe: BACK,
    found: makeInverter(even, BACK)(even),
    places,
  });
  assert(round !== undefined);
  assertLess(round.major_fwhm_kms / round.minor_fwhm_kms, 1.15);
  assertAlmostEquals(round.recovered_flux, 1, 0.15);
  assertLess(round.offset_kms, 5);
  // Phases 0.1 to 0.4 only: velocity along Vy is seen best, so the response is long along Vx.
  const narrow = observed(EVEN.map((p) => 0.12 + 0.26 * p), { map: DISC, noise: 1e-3 });
  const [long] = pointResponses(narrow, {
    recipe: BACK,
    found: makeInverter(narrow, BACK)(narrow),
    places,
  });
  assertGreater(long!.major_fwhm_kms / long!.minor_fwhm_kms, 1.3);
  assertAlmostEquals(Math.abs(long!.tilt_deg), 0, 15);
});

Deno.test("pointResponses() widens along the smear, most far from the centre", () => {
  const smeared = observed(EVEN, { map: DISC, noise: 1e-3, phase_width: 0.06 });
  const found = makeInverter(smeared, BACK)(smeared);
  const [near, far] = pointResponses(smeared, {
    recipe: BACK,
    found,
    places: [{ vx_kms: 100, vy_kms: 0 }, { vx_kms: 500, vy_kms: 0 }],
  });
  // A smear of 0.06 orbits at 500 km/s is 190 km/s long, at right angles to the radius.
  assertGreater(far!.major_fwhm_kms, near!.major_fwhm_kms + 50);
  assertAlmostEquals(Math.abs(far!.tilt_deg), 90, 15);
});

Deno.test("samplingStructures() finds little for even phases and much where phases are missing", () => {
  const size = (phases: readonly number[]) => {
    const trail = observed(phases, { map: DISC, noise: 1e-4 });
    const made = samplingStructures(trail, { recipe: BACK, resolution_kms: 71 });
    return made.intensity.reduce((most, f) => Math.max(most, Math.abs(f)), 0) / Math.max(...DISC);
  };
  assertLess(size(EVEN), 0.05);
  assertGreater(size(EVEN.map((p) => 0.1 + 0.3 * p)), 0.2);
});

Deno.test("featureBias() says that entropy with a flat default loses flux of a spot", () => {
  const map = gaussianMap(shape, [
    { flux: 200, vx: 0, vy: 0, s1: 250, s2: 250 },
    { flux: 20, vx: -300, vy: 200, s1: 40, s2: 40 },
  ]);
  const trail = observed(EVEN, { map, noise: 0.01 });
  const base = { inversion: "entropy", ...shape, prior: { kind: "uniform" } } as const;
  const first = maximumEntropy(trail, base);
  const recipe: InversionRecipe = {
    ...base,
    multiplier: first.multiplier,
    start: first.map,
    level: first.level,
  };
  const found = makeInverter(trail, recipe)(trail);
  const look = { resolution_kms: 70 };
  const peaks = featurePeaks(found.map, look).slice(0, 1);
  const [bias = NaN] = featureBias(trail, { recipe, found, peaks, ...look });
  assertLess(bias, 1);
  assertGreater(bias, 0.6);
});

Deno.test("crossValidate() prefers a sensible weight to one far off", () => {
  const trail = observed(EVEN, { map: DISC, noise: 0.02 });
  const recipe = (weight: number): InversionRecipe => ({
    inversion: "total-variation",
    ...shape,
    weight,
    force: true,
    max_iterations: 2000,
  });
  const noise = makeInverter(trail, { inversion: "total-variation", ...shape })(trail).multiplier!;
  const found = crossValidate(trail, {
    recipes: [recipe(0.3 * noise), recipe(noise), recipe(30 * noise)],
    parts: 3,
  });
  assertEquals(found.best, 1);
  // What is predicted carries its own noise: a little above one.
  assertAlmostEquals(found.predicted_chi_square[1]!, 1.02, 0.06);
});

Deno.test("insideOutMap() keeps the flux of a region and comes back when applied twice", () => {
  const intensity = gaussianMap(shape, [{ flux: 7, vx: 300, vy: 250, s1: 50, s2: 50 }]);
  const turned = insideOutMap({ ...shape, intensity });
  const sum = (m: Float64Array) => m.reduce((a, b) => a + b, 0) * 25 ** 2;
  assertAlmostEquals(sum(turned.intensity), 7, 0.1);
  const back = insideOutMap(turned);
  const peak = Math.max(...intensity);
  back.intensity.forEach((f, k) => assertAlmostEquals(f, intensity[k]!, 0.12 * peak));
});

Deno.test("insideOutOperator() has an exact transpose and solves to the same data", () => {
  const trail = observed(EVEN, { map: DISC, noise: 0.01 });
  const operator = insideOutOperator(makeProjector(trail.sampling, shape), shape);
  const random = randomStream(2);
  const image = Float64Array.from({ length: operator.image_size }, random.normal);
  const data = Float64Array.from({ length: operator.sample_count }, random.normal);
  const dot = (a: Float64Array, b: Float64Array) => a.reduce((s, x, k) => s + x * b[k]!, 0);
  const seen = operator.forward(image);
  const off = dot(seen, data) - dot(image, operator.adjoint(data));
  assertLess(Math.abs(off) / Math.sqrt(dot(seen, seen) * dot(data, data)), 1e-12);
  const found = maximumEntropy(trail, {
    ...shape,
    prior: { kind: "uniform" },
    reduced_chi_square: 1.05,
    inside_out: true,
  });
  assertAlmostEquals(found.reduced_chi_square, 1.05, 2e-3);
  const model = makeProjector(trail.sampling, shape).forward(found.map.intensity);
  found.model.forEach((m, k) => assertAlmostEquals(m, model[k]!, 1e-9));
});

Deno.test("separateMaps() gives each of two overlapping lines its own map", () => {
  const rest_ratios = [1, 1 + 600 / 299792.458];
  const sampling = plainSampling({
    phases: EVEN,
    bins: 111,
    first_kms: -1125,
    step_kms: 25,
    sigma_kms: 30,
  });
  const first = gaussianMap(shape, [{ flux: 40, vx: -300, vy: 150, s1: 60, s2: 60 }]);
  const second = gaussianMap(shape, [{ flux: 25, vx: 100, vy: 300, s1: 60, s2: 60 }]);
  const random = randomStream(4);
  const operator = separateProjector(sampling, { ...shape, rest_ratios });
  const flux = operator.forward(Float64Array.from([...first, ...second]))
    .map((f) => f + 0.004 * random.normal());
  const found = separateMaps({ sampling, flux, error: flux.map(() => 0.004) }, {
    ...shape,
    rest_ratios,
    reduced_chi_square: 1.05,
  });
  const place = (m: Float64Array) => {
    const best = m.reduce((b, f, k) => f > m[b]! ? k : b, 0);
    return [(best % 61) * 25 - 750, Math.floor(best / 61) * 25 - 750];
  };
  assertAlmostEquals(place(found.maps[0]!.intensity)[0]!, -300, 25);
  assertAlmostEquals(place(found.maps[1]!.intensity)[1]!, 300, 25);
});

Deno.test("maximumEntropy() makes a signed map of a line that is part absorption, both signs at their places", () => {
  const blobs = [
    { flux: 60, vx: -250, vy: 150, s1: 70, s2: 70 },
    { flux: -50, vx: 200, vy: -100, s1: 90, s2: 90 },
  ];
  const map = gaussianMap(shape, blobs);
  const trail = observed(EVEN, { map, noise: 0.004 });
  const found = maximumEntropy(trail, { ...shape, signed: true, reduced_chi_square: 1.03 });
  assertAlmostEquals(found.reduced_chi_square, 1.03, 2e-3);
  assertEquals(found.warnings, []);
  const { intensity } = found.map;
  let off = 0, all = 0;
  map.forEach((f, k) => {
    off += (f - intensity[k]!) ** 2;
    all += f * f;
  });
  assertLess(Math.sqrt(off / all), 0.25);
  for (const { flux, vx, vy, s1 } of blobs) {
    // Flux, and centroid of one sign, within three widths, where 99 % of a Gaussian lies.
    let sum = 0, weight = 0, x = 0, y = 0;
    intensity.forEach((f, k) => {
      const dx = (k % 61) * 25 - 750 - vx, dy = Math.floor(k / 61) * 25 - 750 - vy;
      if (Math.hypot(dx, dy) > 3 * s1) return;
      sum += f * 625;
      const w = Math.max(0, Math.sign(flux) * f);
      weight += w;
      x += w * dx;
      y += w * dy;
    });
    // Regularisation takes a part of the flux; a place it leaves.
    assertAlmostEquals(sum / flux, 0.95, 0.07);
    assertLess(Math.hypot(x, y) / weight, 8);
  }
});

Deno.test("maximumEntropy() warns where data go below zero and positivity cannot follow", () => {
  const map = gaussianMap(shape, [
    { flux: 100, vx: -250, vy: 150, s1: 70, s2: 70 },
    { flux: -25, vx: 300, vy: -100, s1: 60, s2: 60 },
  ]);
  const trail = observed(EVEN, { map, noise: 0.004 });
  const options = { ...shape, prior: { kind: "uniform" } } as const;
  const { found, reached } = bestPositiveMap(trail, { ...options, reduced_chi_square: 1 });
  assertEquals(reached, false);
  assertEquals(found.warnings.map((w) => w.code), ["negative-flux"]);
  const fine = observed(EVEN, { map: DISC, noise: 0.004 });
  assertEquals(maximumEntropy(fine, { ...options, reduced_chi_square: 1.03 }).warnings, []);
});
