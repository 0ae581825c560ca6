import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertThrows,
} from "@std/assert";
import { NotConverged } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  fourierMetric,
  makeProjector,
  maximumEntropy,
  totalVariation,
  totalVariationSteps,
  type VariationMap,
  variationSteps,
} from "@millrace/millrace/tomography";
import { benchProblem } from "./bench_problem.ts";
import { gaussianTrail, plainSampling } from "./samplings.ts";

Deno.test("fourierMetric() solves as a plain sum over frequencies does", () => {
  const pixels = 5;
  const metric = fourierMetric(pixels);
  const n = metric.size;
  const random = randomStream(1);
  const values = Float64Array.from({ length: pixels * pixels }, random.normal);
  const symbol = new Float64Array(n * n);
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < n; c++) {
      symbol[r * n + c] = 1 + 3 * Math.sin(Math.PI * r / n) ** 2 + Math.sin(Math.PI * c / n) ** 2;
    }
  }
  const found = metric.solve(values, symbol);
  for (let y = 0; y < pixels; y++) {
    for (let x = 0; x < pixels; x++) {
      let sum = 0;
      for (let r = 0; r < n; r++) {
        for (let c = 0; c < n; c++) {
          for (let v = 0; v < pixels; v++) {
            for (let u = 0; u < pixels; u++) {
              const angle = 2 * Math.PI * (r * (y - v) + c * (x - u)) / n;
              sum += values[v * pixels + u]! * Math.cos(angle) / (symbol[r * n + c]! * n * n);
            }
          }
        }
      }
      assertAlmostEquals(found[y * pixels + x]!, sum, 1e-10);
    }
  }
});

const shape = { pixels: 81, half_width_kms: 1000, systemic_kms: 0 };
const sampling = plainSampling({
  phases: Array.from({ length: 40 }, (_, i) => i / 40),
  bins: 121,
  first_kms: -1500,
  step_kms: 25,
  sigma_kms: 35,
});

function disc(k: number): number {
  const v = Math.hypot((k % 81) * 25 - 1000, Math.floor(k / 81) * 25 - 1000);
  return v < 500 ? 4e-4 : 0;
}
const FLAT = Float64Array.from({ length: 81 * 81 }, (_, k) => disc(k));

function flatTrail(noise: number, seed = 1) {
  const random = randomStream(seed);
  const clean = makeProjector(sampling, shape).forward(FLAT);
  return {
    sampling,
    flux: clean.map((f) => f + noise * random.normal()),
    error: clean.map(() => noise),
  };
}

function mapError(map: Float64Array, truth: Float64Array): number {
  let off = 0, all = 0;
  map.forEach((f, k) => {
    off += (f - truth[k]!) ** 2;
    all += truth[k]! ** 2;
  });
  return Math.sqrt(off / all);
}

Deno.test("totalVariation() keeps the edge and the flatness of a disc better than entropy does", () => {
  const trail = flatTrail(0.01);
  const flat = totalVariation(trail, shape);
  const smooth = maximumEntropy(trail, {
    ...shape,
    prior: { kind: "uniform" },
    reduced_chi_square: 1.02,
  });
  assertLess(
    mapError(flat.map.intensity, FLAT),
    0.7 * mapError(smooth.map.intensity, FLAT),
  );
  // Within the disc the scatter is a few per cent; the edge falls within about two resolutions.
  const row = Array.from({ length: 41 }, (_, c) => flat.map.intensity[40 * 81 + 40 + c]!);
  for (let c = 0; c < 14; c++) assertAlmostEquals(row[c]! / 4e-4, 1, 0.1);
  for (let c = 27; c < 41; c++) assertAlmostEquals(row[c]! / 4e-4, 0, 0.05);
});

Deno.test("totalVariation() is at most 0.6 times as far from the truth as entropy at S/N 30", () => {
  const { trail, shape, truth } = benchProblem("medium", { signal_to_noise: 30 });
  const flat = totalVariation(trail, shape);
  const smooth = maximumEntropy(trail, { ...shape, prior: { kind: "uniform" } });
  assert(flat.converged);
  assertLess(mapError(flat.map.intensity, truth), 0.6 * mapError(smooth.map.intensity, truth));
});

Deno.test("variationSteps() treats all corners alike: the image of a mirrored or turned one is that image mirrored or turned", () => {
  const pixels = 9, random = randomStream(4);
  const flux = Float64Array.from({ length: 81 }, () => 1 + random.uniform());
  const moved = (f: Float64Array, where: (x: number, y: number) => [number, number]) =>
    f.map((_, k) => {
      const [x, y] = where(k % pixels, Math.floor(k / pixels));
      return f[y * pixels + x]!;
    });
  const identity = (x: Float64Array, into: Float64Array = new Float64Array(81)) => {
    into.set(x);
    return into;
  };
  const smooth = (f: Float64Array) => {
    let last;
    for (
      last of variationSteps({
        operator: { image_size: 81, sample_count: 81, forward: identity, adjoint: identity },
        samples: { flux: f, error: f.map(() => 0.3) },
        ...{ pixels, level: 1, profile_pixels: 0.5, start: f },
      }, { weight: 1, settled: 1e-6, max_iterations: 4000 })
    );
    return last!.image;
  };
  const straight = smooth(flux);
  for (
    const where of [
      (x: number, y: number) => [8 - x, y],
      (x: number, y: number) => [x, 8 - y],
      (x: number, y: number) => [y, x],
      (x: number, y: number) => [8 - y, x],
    ] as ((x: number, y: number) => [number, number])[]
  ) {
    const expected = moved(straight, where);
    // The steps stop at 1e-6 of the image; what is left of each solution is some hundred times that.
    smooth(moved(flux, where)).forEach((f, k) => assertAlmostEquals(f, expected[k]!, 1e-4));
  }
});

Deno.test("totalVariation() is settled: going on for long changes it by less than 3 %", () => {
  const { trail, shape } = benchProblem("small", { signal_to_noise: 30 });
  const found = totalVariation(trail, shape);
  const limit = totalVariation(trail, {
    ...shape,
    start: found.map,
    settled: 5e-5,
    max_iterations: 3000,
  });
  assertLess(mapError(found.map.intensity, limit.map.intensity), 0.03);
});

Deno.test("totalVariation() reaches the chi-square it is asked for by changing its weight", () => {
  const trail = flatTrail(0.02);
  const found = totalVariation(trail, { ...shape, reduced_chi_square: 1.05 });
  assertAlmostEquals(found.reduced_chi_square, 1.05, 0.006);
  const given = totalVariation(trail, { ...shape, weight: found.weight });
  assertAlmostEquals(given.reduced_chi_square, 1.05, 0.02);
});

Deno.test("totalVariation() varies less where the weight is larger", () => {
  const trail = flatTrail(0.02);
  const results = [1, 4, 16].map((weight) => totalVariation(trail, { ...shape, weight }));
  assertGreater(results[0]!.variation, results[1]!.variation);
  assertGreater(results[1]!.variation, results[2]!.variation);
  assertLess(results[0]!.reduced_chi_square, results[2]!.reduced_chi_square);
});

Deno.test("totalVariation() makes no negative pixel, keeps the flux and leaves its input alone", () => {
  const trail = flatTrail(0.01);
  const before = structuredClone(trail);
  const { map } = totalVariation(trail, shape);
  assert(map.intensity.every((f) => f >= 0));
  const sum = (m: Float64Array) => m.reduce((a, b) => a + b, 0);
  assertAlmostEquals(sum(map.intensity) / sum(FLAT), 1, 0.02);
  assertEquals(trail, before);
  assertEquals(totalVariation(trail, shape).map, map);
});

Deno.test("totalVariation() inverts absorption with its sign turned and spares masked samples", () => {
  const flux = gaussianTrail(sampling, [{ flux: -30, vx: -300, vy: 200, s1: 80, s2: 80 }]);
  const random = randomStream(2);
  const error = flux.map((_, k) => k % 17 === 0 ? Infinity : 0.005);
  const trail = {
    sampling,
    flux: flux.map((f, k) => error[k] === Infinity ? NaN : f + 0.005 * random.normal()),
    error,
  };
  const { map, model } = totalVariation(trail, { ...shape, absorption: true });
  const best = map.intensity.reduce((b, f, k) => f > map.intensity[b]! ? k : b, 0);
  assertAlmostEquals((best % 81) * 25 - 1000, -300, 50);
  assertLess(Math.min(...model), -0.05);
});

Deno.test("totalVariationSteps() shows progress; running out of iterations hands over the map", () => {
  const trail = flatTrail(0.01);
  const states = [...totalVariationSteps(trail, shape)];
  assertEquals(states.map((s) => s.iterations), states.map((_, i) => 10 * i));
  assertEquals(states.map((s) => s.converged).indexOf(true), states.length - 1);
  const error = assertThrows(
    () => totalVariation(trail, { ...shape, max_iterations: 10 }),
    NotConverged,
  ) as NotConverged<VariationMap>;
  assert(
    error.message.startsWith(
      "Cannot finish total-variation map: after 10 iterations reduced chi-square is",
    ),
  );
  assertEquals(error.partial.iterations, 10);
});

// Source: the same map with a projector of its own, for which nothing is known beforehand.
Deno.test("totalVariation() finds the step size of a projector anew when the errors change", () => {
  const small = { pixels: 41, half_width_kms: 1000, systemic_kms: 0, max_iterations: 10 };
  const blurred = plainSampling({
    phases: Array.from({ length: 12 }, (_, i) => i / 12),
    bins: 61,
    first_kms: -1500,
    step_kms: 50,
    sigma_kms: 70,
  });
  const flux = gaussianTrail(blurred, [{ vx: 300, vy: 0, s1: 100, s2: 100, flux: 100 }]);
  const mapOf = (error: number, projector = makeProjector(blurred, small)) => {
    const settings = { ...small, weight: 1, settled: 0, projector };
    const data = { sampling: blurred, flux, error: flux.map(() => error) };
    return assertThrows(() => totalVariation(data, settings), NotConverged).partial as VariationMap;
  };
  const shared = makeProjector(blurred, small);
  const first = mapOf(0.02, shared), again = mapOf(0.02, shared), closer = mapOf(0.002, shared);
  assertEquals(again.map, first.map);
  assertLess(again.operator_calls, first.operator_calls);
  assertEquals(closer.map, mapOf(0.002).map);
});
