import { assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  backProject,
  halfOrbitIntervals,
  largestHalfOrbitGap,
  mapPeak,
  mapStep,
} from "@millrace/millrace/tomography";
import radon from "../reference/radon.json" with { type: "json" };
import { gaussianMap, gaussianTrail, plainGrid, plainSampling } from "./samplings.ts";

interface FbpCase {
  readonly id: string;
  readonly kind: string;
  readonly dv: number;
  readonly gamma: number;
  readonly n: number;
  readonly angles: number;
  readonly data: number[][];
  readonly map: number[][];
  readonly map_max: number;
  readonly true_max: number;
  readonly blobs: [number, number, number, number][];
  readonly "rms_map_minus_true_over_true_max_within_0.6": number;
}
const cases = radon.cases.filter((c) => c.kind === "fbp") as unknown as FbpCase[];

function problem(c: FbpCase) {
  const stretch = 1 + c.gamma / 299792.458; // the file adds γ, here it is a factor
  const grid = {
    rows: c.angles,
    columns: c.n,
    first_kms: c.gamma - (c.n - 1) / 2 * c.dv * stretch,
    step_kms: c.dv * stretch,
    phase: Float64Array.from({ length: c.angles }, (_, j) => j / c.angles),
    flux: Float64Array.from(c.data.flat()),
    error: new Float64Array(c.angles * c.n).fill(1),
  };
  const options = {
    pixels: c.n,
    half_width_kms: (c.n - 1) / 2 * c.dv,
    systemic_kms: c.gamma,
    wiener: false,
    circle: true,
  } as const;
  return { trail: { grid }, options };
}

for (const c of cases) {
  // reference/radon.json kind fbp: Kak & Slaney kernel and linear interpolation, by scikit-image.
  Deno.test(`backProject() gives the map of ${c.id} when the method is reference`, () => {
    const { trail, options } = problem(c);
    const map = backProject(trail, { ...options, method: "reference" });
    c.map.flat().forEach((value, k) =>
      assertAlmostEquals(map.intensity[k]!, value, 1e-8 * c.map_max, `pixel ${k}`)
    );
  });

  // The fast one interpolates better than the file's linear rule, so it is held to the truth.
  Deno.test(`backProject() is as near to the truth of ${c.id} as the reference when it is fast`, () => {
    const { trail, options } = problem(c);
    const map = backProject(trail, options);
    const truth = gaussianMap(
      options,
      c.blobs.map(([flux, vx, vy, s]) => ({ flux, vx, vy, s1: s, s2: s })),
    );
    let sum = 0, count = 0;
    const middle = (c.n - 1) / 2;
    map.intensity.forEach((value, k) => {
      const x = k % c.n - middle, y = Math.floor(k / c.n) - middle;
      if (Math.hypot(x, y) > 0.6 * middle) return;
      sum += (value - truth[k]!) ** 2;
      count++;
    });
    assertLess(
      Math.sqrt(sum / count) / c.true_max,
      c["rms_map_minus_true_over_true_max_within_0.6"],
    );
  });
}

const blob = { flux: 40, vx: -310, vy: 170, s1: 70, s2: 70 };
const shape = { pixels: 101, half_width_kms: 1000, systemic_kms: 30 };

function blobTrail(phases: readonly number[], noise = 0, seed = 1) {
  const sampling = plainSampling({
    phases,
    bins: 161,
    first_kms: -1600,
    step_kms: 20,
    sigma_kms: 25,
  });
  const random = randomStream(seed);
  const flux = gaussianTrail(sampling, [blob], 30).map((f) => f + noise * random.normal());
  const error = new Float64Array(flux.length).fill(noise > 0 ? noise : 1e-6);
  return { grid: plainGrid(sampling, flux, error) };
}
const even = Array.from({ length: 60 }, (_, i) => i / 60);

function fluxWithin(map: Float64Array, radius: number): number {
  const step = mapStep(shape);
  return map.reduce((sum, f, k) => {
    const x = (k % 101) * step - 1000 - blob.vx, y = Math.floor(k / 101) * step - 1000 - blob.vy;
    return Math.hypot(x, y) < radius ? sum + f * step * step : sum;
  }, 0);
}

for (const wiener of [false, true]) {
  Deno.test(`backProject() puts a source at its place with its flux when wiener is ${wiener}`, () => {
    const map = backProject(blobTrail(even), { ...shape, wiener });
    const peak = mapPeak(map);
    assertAlmostEquals(peak.vx_kms, -310, 2);
    assertAlmostEquals(peak.vy_kms, 170, 2);
    // Within 5 σ of the source; the filter's side lobes beyond carry under 1 %.
    assertAlmostEquals(fluxWithin(map.intensity, 370), 40, 0.4);
  });
}

Deno.test("backProject() keeps the flux when phases are uneven and doubled", () => {
  const uneven = [
    ...even.filter((p) => p < 0.5),
    ...even.filter((p) => p < 0.3).map((p) => p + 0.004),
  ];
  const map = backProject(blobTrail(uneven), shape);
  assertAlmostEquals(fluxWithin(map.intensity, 370), 40, 0.8);
});

Deno.test("backProject() makes less noise when it holds noisy frequencies back", () => {
  const noisy = blobTrail(even, 0.03);
  const clean = blobTrail(even);
  const rms = (wiener: boolean) => {
    const a = backProject(noisy, { ...shape, wiener }).intensity;
    const b = backProject(clean, { ...shape, wiener: false }).intensity;
    return Math.sqrt(a.reduce((sum, f, k) => sum + (f - b[k]!) ** 2, 0));
  };
  assertLess(rms(true), 0.6 * rms(false));
});

Deno.test("backProject() bridges masked bins and ignores what stands in them", () => {
  const { grid } = blobTrail(even);
  const flux = grid.flux.slice(), error = grid.error.slice();
  for (let i = 0; i < 60; i++) {
    flux[161 * i + 90] = i % 2 === 0 ? NaN : 1e6;
    error[161 * i + 90] = Infinity;
  }
  const peak = mapPeak(backProject({ grid: { ...grid, flux, error } }, shape));
  assertAlmostEquals(peak.vx_kms, -310, 3);
  assertAlmostEquals(peak.vy_kms, 170, 3);
});

Deno.test("backProject() leaves its trail alone", () => {
  const trail = blobTrail(even, 0.01);
  const before = structuredClone(trail);
  backProject(trail, shape);
  assertEquals(trail, before);
});

Deno.test("backProject() refuses when every bin is masked", () => {
  const { grid } = blobTrail(even);
  const error = assertThrows(
    () => backProject({ grid: { ...grid, error: grid.error.map(() => Infinity) } }, shape),
    InputError,
  );
  assertEquals(
    error.message,
    "Cannot back-project trail as at least one exposure must have an unmasked bin with a positive " +
      "error: current value is 60 exposures without",
  );
});

Deno.test("halfOrbitIntervals() adds up to half an orbit and caps what lies beside a gap", () => {
  const phase = Float64Array.from([0.0, 0.02, 0.54, 0.06, 0.58]);
  const open = halfOrbitIntervals(phase, { cap: Infinity });
  assertAlmostEquals(open.reduce((a, b) => a + b), 0.5, 1e-12);
  assertAlmostEquals(open[2]!, 0.02, 1e-12);
  const capped = halfOrbitIntervals(phase);
  assertAlmostEquals(capped[0]!, 0.04, 1e-12);
  assertAlmostEquals(largestHalfOrbitGap(phase), 0.42, 1e-12);
});
