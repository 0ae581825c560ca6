import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertLessOrEqual,
  assertThrows,
} from "@std/assert";
import { InputError, NotConverged } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  blendProjector,
  type EntropyMap,
  freeBaselines,
  makeProjector,
  mapStep,
  maximumEntropy,
  maximumEntropySteps,
  type PriorImage,
  SIGNED_ENTROPY,
  solveEntropy,
  type VelocityMap,
} from "@millrace/millrace/tomography";
import reference from "../reference/entropy.json" with { type: "json" };
import { benchProblem } from "./bench_problem.ts";
import { gaussianMap, gaussianTrail, plainSampling, ragged } from "./samplings.ts";

const UNIFORM: PriorImage = { kind: "uniform" };

for (const c of reference.cases) {
  // reference/entropy.json: the same problem minimised by scipy's L-BFGS-B and dense Newton steps.
  Deno.test(`solveEntropy() gives scipy's map of ${c.id}`, () => {
    const sampling = plainSampling({ ...c, phases: c.phases });
    const operator = makeProjector(sampling, {
      pixels: c.pixels,
      half_width_kms: c.half_width_kms,
      systemic_kms: 0,
      method: "reference",
    });
    const level = new Float64Array(c.pixels ** 2).fill(c.level);
    const problem = {
      operator,
      samples: { flux: Float64Array.from(c.data), error: Float64Array.from(c.error) },
      prior: () => level,
      start: c.kind === "signed" ? new Float64Array(level.length) : level,
      ...(c.kind === "signed" ? { measure: SIGNED_ENTROPY } : {}),
    };
    const goals = [
      { reduced_chi_square: c.reduced_chi_square, chi_square_tolerance: 1e-10 },
      { multiplier: c.alpha },
    ];
    const peak = Math.max(...c.map.map(Math.abs));
    for (const goal of goals) {
      const found = solveEntropy(problem, { ...goal, misalignment: 1e-14, max_iterations: 500 });
      found.image.forEach((f, k) => assertAlmostEquals(f, c.map[k]!, 1e-6 * peak, `pixel ${k}`));
      assertAlmostEquals(found.reduced_chi_square, c.reduced_chi_square, 1e-6);
      assertAlmostEquals(found.multiplier / c.alpha, 1, 1e-6);
    }
  });
}

// Counts are bits of this code, not of the machine. Set goals: 30/50 at S/N 30, 80/80 at S/N 100.
for (
  const [signal_to_noise, kind, most] of [
    [10, "uniform", 20],
    [10, "blurred", 32],
    [30, "uniform", 25],
    [30, "blurred", 35],
    [100, "uniform", 45],
    [100, "blurred", 60],
  ] as const
) {
  Deno.test(`maximumEntropy() takes at most ${most} operator calls at S/N ${signal_to_noise}, ${kind}`, () => {
    const { trail, shape } = benchProblem("medium", { signal_to_noise });
    const prior: PriorImage = kind === "uniform" ? UNIFORM : { kind, fwhm_kms: 60 };
    const found = maximumEntropy(trail, { ...shape, prior });
    assertAlmostEquals(found.reduced_chi_square, 1, 1e-3);
    assertLessOrEqual(found.misalignment, 0.01);
    assertLessOrEqual(found.operator_calls, most);
    assert(found.converged);
  });
}

const ORBIT = Array.from({ length: 40 }, (_, i) => i / 40);
const shape = { pixels: 81, half_width_kms: 1000, systemic_kms: 0 };
const sampling = plainSampling({
  phases: ORBIT,
  bins: 121,
  first_kms: -1500,
  step_kms: 25,
  sigma_kms: 35,
});

function noisyTrail(clean: Float64Array, noise: number, seed = 1) {
  const random = randomStream(seed);
  return {
    sampling,
    flux: clean.map((f) => f + noise * random.normal()),
    error: clean.map(() => noise),
  };
}

// The truth itself has a reduced chi-square of 1 ± √(2/N), 0.02 here: a map with so few free features
// as one source cannot always go down to 1.
const RELAXED = { prior: UNIFORM, reduced_chi_square: 1.05 } as const;

/** Centroid within 200 km/s of the source: its error is below 0.2 km/s for the noise in these tests. */
function centroid(map: VelocityMap): { vx: number; vy: number } {
  let weight = 0, x = 0, y = 0;
  map.intensity.forEach((f, k) => {
    const vx = (k % 81) * 25 - 1000, vy = Math.floor(k / 81) * 25 - 1000;
    if (Math.hypot(vx + 300, vy - 200) > 200) return;
    weight += f;
    x += f * vx;
    y += f * vy;
  });
  return { vx: x / weight, vy: y / weight };
}

const POINT = { flux: 30, vx: -300, vy: 200, s1: 60, s2: 60 };

for (
  const prior of [
    UNIFORM,
    { kind: "blurred", fwhm_kms: 200 },
    { kind: "axisymmetric", centre: { vx_kms: 0, vy_kms: 0 } },
    { kind: "mixed", fwhm_kms: 200, centre: { vx_kms: 0, vy_kms: 0 } },
    {
      kind: "image",
      map: { pixels: 81, half_width_kms: 1000, intensity: new Float64Array(6561).fill(1e-5) },
    },
  ] as PriorImage[]
) {
  Deno.test(`maximumEntropy() puts a source at its place with its flux when the prior is ${prior.kind}`, () => {
    const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.002);
    const found = maximumEntropy(trail, { ...shape, prior });
    const place = centroid(found.map);
    assertAlmostEquals(place.vx, -300, 1);
    assertAlmostEquals(place.vy, 200, 1);
    const flux = found.map.intensity.reduce((a, b) => a + b, 0) * mapStep(shape) ** 2;
    // Exposures fix the flux to 0.6 km/s / √40 each; the prior's pull adds a few per cent.
    assertAlmostEquals(flux, 30, 1.2);
    assert(found.map.intensity.every((f) => f > 0));
  });
}

Deno.test("maximumEntropy() finds a ring's radius", () => {
  const ring = gaussianMap(
    shape,
    Array.from({ length: 60 }, (_, i) => ({
      flux: 1,
      vx: 500 * Math.cos(i / 60 * 2 * Math.PI),
      vy: 500 * Math.sin(i / 60 * 2 * Math.PI),
      s1: 40,
      s2: 40,
    })),
  );
  const clean = makeProjector(sampling, shape).forward(ring);
  const { map } = maximumEntropy(noisyTrail(clean, 0.002), { ...shape, prior: UNIFORM });
  let weight = 0, radius = 0;
  map.intensity.forEach((f, k) => {
    const r = Math.hypot((k % 81) * 25 - 1000, Math.floor(k / 81) * 25 - 1000);
    if (r < 250 || r > 750) return;
    weight += f;
    radius += f * r;
  });
  assertAlmostEquals(radius / weight, 500, 5);
});

Deno.test("maximumEntropy() comes as near to noise-free data as it is asked to", () => {
  const truth = gaussianMap(shape, [POINT, { flux: 100, vx: 0, vy: -60, s1: 250, s2: 250 }]);
  const clean = makeProjector(sampling, shape).forward(truth);
  const trail = { sampling, flux: clean, error: clean.map(() => 1e-3) };
  const errors = [1, 0.1, 0.01].map((reduced_chi_square) => {
    const found = maximumEntropy(trail, { ...shape, prior: UNIFORM, reduced_chi_square });
    const sum = truth.reduce((s, t, k) => s + (found.map.intensity[k]! - t) ** 2, 0);
    return Math.sqrt(sum / truth.reduce((s, t) => s + t * t, 0));
  });
  assertLess(errors[1]!, errors[0]!);
  assertLess(errors[2]!, errors[1]!);
  // Features of 60 km/s seen through a profile of 35 km/s: what is left is beyond its resolution.
  assertLess(errors[2]!, 0.03);
});

Deno.test("maximumEntropySteps() shows progress and leaves its input alone", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.01);
  const before = structuredClone(trail);
  const states = [...maximumEntropySteps(trail, { ...shape, prior: UNIFORM })];
  assertGreater(states.length, 2);
  assertEquals(states.map((s) => s.converged).indexOf(true), states.length - 1);
  assertEquals(states.map((s) => s.iterations), states.map((_, i) => i));
  assertEquals(trail, before);
  // The last map is the caller's own: another solution leaves it alone.
  const last = states.at(-1)!.map.intensity, copy = last.slice();
  maximumEntropy(noisyTrail(gaussianTrail(sampling, [POINT]), 0.02), { ...shape, prior: UNIFORM });
  assertEquals(last, copy);
});

Deno.test("maximumEntropy() gives the same bits twice, and when a masked sample holds anything", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.01);
  const error = trail.error.slice();
  for (let k = 7; k < error.length; k += 50) error[k] = Infinity;
  const spoilt = trail.flux.map((f, k) => error[k] === Infinity ? (k % 2 === 0 ? NaN : 1e9) : f);
  const once = maximumEntropy({ ...trail, error }, { ...shape, prior: UNIFORM });
  const twice = maximumEntropy({ ...trail, error, flux: spoilt }, { ...shape, prior: UNIFORM });
  assertEquals(once.map.intensity, twice.map.intensity);
});

Deno.test("maximumEntropy() inverts an absorption line with its sign turned", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [{ ...POINT, flux: -30 }]), 0.004);
  const error = assertThrows(() => maximumEntropy(trail, { ...shape, prior: UNIFORM }), InputError);
  assertEquals(
    error.message.replace(/-?\d+\.\d+/, "X"),
    "Cannot make velocity map as a line inverted as it is must be in emission on the whole: " +
      "current value is X km/s mean equivalent width; invert it with its sign turned, or give the level " +
      "of the map",
  );
  const found = maximumEntropy(trail, { ...shape, ...RELAXED, absorption: true });
  assertAlmostEquals(centroid(found.map).vx, -300, 1);
  assertLess(Math.min(...found.model), -0.05);
});

Deno.test("maximumEntropy() says that a goal is out of reach and hands over what it reached", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.01);
  const error = assertThrows(
    () => maximumEntropy(trail, { ...shape, prior: UNIFORM, reduced_chi_square: 0.3 }),
    NotConverged,
  ) as NotConverged<EntropyMap>;
  assert(error.message.startsWith(
    "Cannot fit maximum-entropy map to reduced chi-square 0.3: it stalled at 0.",
  ));
  assertGreater(error.partial.reduced_chi_square, 0.6);
  assertLess(error.partial.reduced_chi_square, 1);
  assertEquals(error.partial.converged, false);
  assertEquals(error.partial.map.intensity.length, 81 * 81);
});

Deno.test("maximumEntropy() raises a goal out of reach when it may, and says both goals", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.01);
  const asked = { ...shape, prior: UNIFORM, reduced_chi_square: 0.3, raise_goal: true } as const;
  const found = maximumEntropy(trail, asked);
  assert(found.converged);
  assertGreater(found.goal!, 0.6);
  assertLess(found.goal!, 1);
  assertAlmostEquals(found.reduced_chi_square / found.goal!, 1, 1e-3);
  assertLessOrEqual(found.misalignment, 0.01);
  const [warning] = found.warnings;
  assertEquals(warning!.code, "goal-raised");
  assert(warning!.text.includes("0.3") && warning!.text.includes(found.goal!.toPrecision(4)));
  // From a flat start it comes to the same place: what was reached is the least chi-square, within 2 %.
  const level = new Float64Array(81 * 81).fill(found.level);
  const again = maximumEntropy(trail, { ...asked, start: { ...shape, intensity: level } });
  assertAlmostEquals(again.goal! / found.goal!, 1, 0.02);
  // A goal within reach is kept.
  const kept = maximumEntropy(trail, { ...asked, reduced_chi_square: 1.1 });
  assertEquals([kept.goal, kept.warnings], [1.1, []]);
});

Deno.test("maximumEntropy() says that iterations ran out and hands over where it stood", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.002);
  const error = assertThrows(
    () => maximumEntropy(trail, { ...shape, prior: UNIFORM, max_iterations: 2 }),
    NotConverged,
  ) as NotConverged<EntropyMap>;
  assert(
    error.message.startsWith(
      "Cannot finish maximum-entropy map in 2 iterations: reduced chi-square",
    ),
  );
  assertEquals(error.partial.iterations, 2);
});

for (
  const [what, change, message] of [
    [
      "two exposures are left",
      { keep: 2 },
      "Cannot make velocity map as at least three exposures must have unmasked samples: current value is 2",
    ],
    [
      "a third of the half orbit is missing",
      { keep: 5 },
      "Cannot make velocity map as phases must leave no gap over 0.35 modulo half an orbit: current value " +
      "is 0.4 cycles; observe the missing phases, or pass --force to make the map all the same",
    ],
    [
      "an error is zero",
      { error: 0 },
      "Cannot make velocity map as errors must be positive (infinite where masked), in exposure 1 too: " +
      "current value is 0; mask the sample, or give the noise of the data",
    ],
    [
      "an unmasked sample is not a number",
      { flux: NaN },
      "Cannot make velocity map as unmasked samples must be numbers, in exposure 1 too: current value is NaN",
    ],
    [
      "the map reaches beyond the data",
      { half_width_kms: 1600 },
      "Cannot make velocity map as a map must not reach beyond the data, which end 1500 km/s from the " +
      "systemic velocity: current value is 1600 km/s (key map.half_width_kms); make the map smaller, or " +
      "lines.reach_kms larger",
    ],
  ] as const
) {
  Deno.test(`maximumEntropy() refuses when ${what}`, () => {
    const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.01);
    const options = { ...shape, prior: UNIFORM };
    const edited = "half_width_kms" in change ? { ...options, ...change, pixels: 161 } : options;
    if ("error" in change) trail.error[3] = change.error;
    if ("flux" in change) trail.flux[3] = change.flux;
    if ("keep" in change) trail.error.fill(Infinity, change.keep * 121);
    const error = assertThrows(() => maximumEntropy(trail, edited), InputError);
    assertEquals(error.message, message);
  });
}

Deno.test("maximumEntropy() makes a map over a gap when forced, with a warning", () => {
  const trail = noisyTrail(gaussianTrail(sampling, [POINT]), 0.01);
  trail.error.fill(Infinity, 5 * 121);
  const found = maximumEntropy(trail, { ...shape, prior: UNIFORM, force: true });
  assertEquals(found.warnings.map((w) => w.code), ["phase-gap"]);
});

Deno.test("freeBaselines() has an exact transpose and takes lines out", () => {
  const random = randomStream(5);
  const uneven = ragged(5, random.uniform);
  const projector = makeProjector(uneven, { pixels: 41, half_width_kms: 400, systemic_kms: 0 });
  const error = uneven.velocity_kms.map((_, k) => k % 9 === 0 ? Infinity : 0.5 + random.uniform());
  const line = uneven.velocity_kms.map((v) => 0.3 + 2e-4 * v);
  const { operator, samples, without } = freeBaselines(projector, {
    sampling: uneven,
    samples: { flux: line, error },
  });
  samples.flux.forEach((f, k) => error[k] !== Infinity && assertAlmostEquals(f, 0, 1e-12));
  assertLess(
    Math.max(...without(line).map((v, k) => error[k] === Infinity ? 0 : Math.abs(v))),
    1e-12,
  );
  const map = Float64Array.from({ length: 41 * 41 }, random.normal);
  const data = Float64Array.from(error, random.normal);
  const dot = (a: Float64Array, b: Float64Array) => a.reduce((s, x, k) => s + x * b[k]!, 0);
  const seen = operator.forward(map);
  const left = dot(seen, data), right = dot(map, operator.adjoint(data));
  assertLess(Math.abs(left - right) / Math.sqrt(dot(seen, seen) * dot(data, data)), 1e-12);
});

Deno.test("maximumEntropy() is not bent by crooked continua when baselines are free", () => {
  const clean = gaussianTrail(sampling, [POINT]);
  const crooked = clean.map((f, k) => f + 0.02 * Math.sin(Math.floor(k / 121)) + 1e-5 * (k % 121));
  const trail = noisyTrail(crooked, 0.003);
  const found = maximumEntropy(trail, { ...shape, prior: UNIFORM, free_baselines: true });
  assertAlmostEquals(found.reduced_chi_square, 1, 1e-3);
  assertAlmostEquals(centroid(found.map).vx, -300, 1);
  assertThrows(() => maximumEntropy(trail, { ...shape, prior: UNIFORM }), NotConverged);
});

Deno.test("blendProjector() adds the members' shares and has an exact transpose", () => {
  const options = { ...shape, members: [{ rest_ratio: 1.002, flux_ratio: 0.4 }] };
  const blend = blendProjector(sampling, options);
  const main = makeProjector(sampling, shape);
  const other = makeProjector(sampling, { ...shape, rest_ratio: 1.002 });
  const random = randomStream(6);
  const map = Float64Array.from({ length: 81 * 81 }, random.uniform);
  const a = main.forward(map), b = other.forward(map);
  blend.forward(map).forEach((f, k) => assertAlmostEquals(f, a[k]! + 0.4 * b[k]!, 1e-12));
  const data = Float64Array.from({ length: blend.sample_count }, random.normal);
  const dot = (x: Float64Array, y: Float64Array) => x.reduce((s, v, k) => s + v * y[k]!, 0);
  const seen = blend.forward(map);
  assertLess(
    Math.abs(dot(seen, data) - dot(map, blend.adjoint(data))) /
      Math.sqrt(dot(seen, seen) * dot(data, data)),
    1e-12,
  );
});

Deno.test("maximumEntropy() maps a blend whose member overlaps the line", () => {
  const rest_ratio = 1 + 700 / 299792.458;
  const wide = plainSampling({
    phases: ORBIT,
    bins: 161,
    first_kms: -1600,
    step_kms: 25,
    sigma_kms: 35,
  });
  const members = [{ rest_ratio, flux_ratio: 0.5 }];
  const truth = gaussianMap(shape, [POINT]);
  const clean = blendProjector(wide, { ...shape, members }).forward(truth);
  const random = randomStream(7);
  const trail = {
    sampling: wide,
    flux: clean.map((f) => f + 0.003 * random.normal()),
    error: clean.map(() => 0.003),
  };
  const found = maximumEntropy(trail, { ...shape, ...RELAXED, blends: members });
  assertAlmostEquals(centroid(found.map).vx, -300, 1);
  const flux = found.map.intensity.reduce((a, b) => a + b, 0) * mapStep(shape) ** 2;
  assertAlmostEquals(flux, 30, 1.5);
});

for (const signal_to_noise of [3, 30, 300]) {
  Deno.test(`maximumEntropy() converges whatever level, unit and coverage at S/N ${signal_to_noise}`, () => {
    const { trail, shape } = benchProblem("small", { signal_to_noise });
    const usual = 1200 / (2 * shape.half_width_kms) ** 2;
    const late = trail.error.map((e, k) =>
      trail.sampling.phase[Math.floor(k / 150)]! > 0.5 ? Infinity : e
    );
    const tiny = (values: Float64Array) => values.map((v) => 1e-15 * v);
    const problems = [
      { trail, options: { level: 100 * usual } },
      { trail, options: { level: 0.01 * usual } },
      { trail: { ...trail, flux: tiny(trail.flux), error: tiny(trail.error) }, options: {} },
      { trail: { ...trail, error: late }, options: {} },
    ];
    for (const problem of problems) {
      for (const prior of [UNIFORM, { kind: "blurred", fwhm_kms: 80 }] as PriorImage[]) {
        const found = maximumEntropy(problem.trail, { ...shape, prior, ...problem.options });
        assertAlmostEquals(found.reduced_chi_square, 1, 1e-3);
      }
    }
  });
}
