import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  type DiagnosticDiagram,
  diagnosticDiagram,
  expectedDrift,
  findPlateau,
  lightCentre,
  measureAccretor,
  trailSymmetry,
  wingSymmetry,
} from "@millrace/millrace/orbit";
import type { Trail } from "@millrace/millrace/trail";
import { exposures, modelTrail, withNoise } from "./simulated_trail.ts";

const K1 = 75, GAMMA = -15;
const disc = { parts: ["disc"], disc: { equivalent_width_kms: 2500 } } as const;
const spotted = (share: number, spot = {}) => ({
  parts: ["disc", "spot"] as const,
  disc: { equivalent_width_kms: 2500 },
  spot: { equivalent_width_kms: 2500 * share / (1 - share), ...spot },
});
const sampling = exposures({ count: 60 });
const symmetric = modelTrail(disc, sampling, { error: 0.05 });
// The same signal to noise in a velocity on pixels twice as wide, for what takes many nights.
const coarse = exposures({ count: 60, pixel_kms: 40, reach_kms: 2600 });
const COARSE = { error: 0.05 / Math.SQRT2 };

/** Plateaus of seeds 1 to n. */
function plateaus(clean: Trail, seeds: number) {
  return Array.from(
    { length: seeds },
    (_, k) => findPlateau(diagnosticDiagram(withNoise(clean, randomStream(k + 1)))),
  );
}

Deno.test("diagnosticDiagram() of a symmetric disc gives K1, γ and ½ at every separation", () => {
  const { rows, covariance } = diagnosticDiagram(symmetric);
  assert(rows.length >= 8);
  for (const { fit, measured, half_separation_kms } of rows) {
    assertEquals(measured, 1);
    // The disc's projector is good to 1e-4 of its peak, the sinc factor is exact for centroids only.
    assertAlmostEquals(fit!.k_kms, K1, 0.6, `${half_separation_kms}`);
    assertAlmostEquals(fit!.systemic_kms, GAMMA, 0.5);
    assertAlmostEquals(fit!.crossing_phase, 0.5, 0.002);
  }
  const width = rows.length;
  rows.forEach(({ curve }, a) =>
    assertAlmostEquals(Math.sqrt(covariance[0]![a * width + a]!), curve.error_kms[0]!, 1e-9)
  );
});

Deno.test("diagnosticDiagram() knows that separations share noise", () => {
  const random = randomStream(2);
  const separations = [900, 950, 1400];
  const found = Array.from(
    { length: 200 },
    () => diagnosticDiagram(withNoise(modelFirst, random), { half_separations_kms: separations }),
  );
  const column = (a: number) => found.map(({ rows }) => rows[a]!.curve.velocity_kms[0]!);
  const correlation = (x: number[], y: number[]) => {
    const mean = (v: number[]) => v.reduce((s, one) => s + one, 0) / v.length;
    const [mx, my] = [mean(x), mean(y)];
    const dot = (p: number[], m: number, q: number[], n: number) =>
      p.reduce((s, one, k) => s + (one - m) * (q[k]! - n), 0);
    return dot(x, mx, y, my) / Math.sqrt(dot(x, mx, x, mx) * dot(y, my, y, my));
  };
  const [c] = found[0]!.covariance;
  const stated = (a: number, b: number) => c![3 * a + b]! / Math.sqrt(c![4 * a]! * c![4 * b]!);
  // 200 trials know a correlation to about 0.07.
  assertAlmostEquals(correlation(column(0), column(1)), stated(0, 1), 0.2);
  assertAlmostEquals(correlation(column(0), column(2)), stated(0, 2), 0.25);
  assert(stated(0, 1) > 0.5 && Math.abs(stated(0, 2)) < 0.1);
});
const modelFirst = modelTrail(disc, exposures({ count: 5, per_orbit: 5 }), { error: 0.05 });

Deno.test("findPlateau(): symmetric disc, 68 per cent intervals of K1 and γ over 200 seeds", () => {
  const found = plateaus(modelTrail(disc, coarse, COARSE), 200).filter((one) => one.accepted);
  // 2σ of the phase alone refuse 9 of 200 good discs. Here 8 are refused; of 200 nights of the demo's
  // star without its spot, from raw exposures and with the error of its zero, 1 was.
  assert(found.length >= 180, `${found.length} accepted`);
  for (
    const [pull, name] of [
      [(f: NonNullable<typeof found[number]["fit"]>) => (f.k_kms - K1) / f.k_error_kms, "K1"],
      [
        (f: NonNullable<typeof found[number]["fit"]>) =>
          (f.systemic_kms - GAMMA) / f.systemic_error_kms,
        "γ",
      ],
    ] as const
  ) {
    const pulls = found.map(({ fit }) => pull(fit!));
    const held = pulls.filter((z) => Math.abs(z) < 1).length / pulls.length;
    assert(held >= 0.6 && held <= 0.76, `${name} held ${held}`);
    const bias = pulls.reduce((sum, z) => sum + z, 0) / pulls.length;
    assertLess(Math.abs(bias), 0.25, `${name} bias ${bias}`);
  }
});

Deno.test("findPlateau(): with a 10 per cent spot K1 is right within 2 errors or not measured", () => {
  for (const spot of [{}, { mixing: 1 }, { radius_over_a: 0.15 }]) {
    const found = plateaus(modelTrail(spotted(0.1, spot), coarse, COARSE), 70);
    const good = found.filter(({ accepted, fit }) =>
      !accepted || Math.abs(fit!.k_kms - K1) < 2 * fit!.k_error_kms
    ).length;
    // 95 per cent asked; 70 trials know a share of 0.95 to 0.026.
    assert(good / found.length >= 0.95 - 2 * 0.026, `${JSON.stringify(spot)}: ${good} of 70`);
  }
});

Deno.test("findPlateau() refuses a wide fast spot and shows the range of K instead", () => {
  const spot = { radius_over_a: 0.15, sigma_kms: 150, mixing: 0.5 };
  const trail = withNoise(
    modelTrail(spotted(0.1, spot), sampling, { error: 0.02 }),
    randomStream(1),
  );
  const { plateau, curves } = measureAccretor(trail);
  assertEquals(plateau.accepted, false);
  assert(plateau.reasons.length > 0 && plateau.k_range_kms![1] > plateau.k_range_kms![0]);
  assert(plateau.reasons.join().includes("still change with separation"), plateau.reasons.join());
  assertEquals(curves.map(({ curve }) => curve.method), [
    "double-gaussian",
    "bisector",
    "centroid",
  ]);
  assert(curves.every(({ measured }) => !measured));
});

Deno.test("findPlateau() judges the phase only where the zero is the donor's", () => {
  const diagram = diagnosticDiagram(withNoise(symmetric, randomStream(3)));
  assertEquals(findPlateau(diagram).accepted, true);
  const blind = findPlateau(diagram, { zero_is_conjunction: false });
  assertEquals(blind.accepted, false);
  assertEquals(blind.phase_offset_sigma, null);
  // A zero 0.02 off its place is seen, unless the ephemeris admits as much.
  const shifted = exposures({ count: 60, from: 0.02 });
  const late = {
    ...withNoise(symmetric, randomStream(3)),
    sampling: { ...sampling, phase: shifted.phase, cycle: shifted.cycle },
  };
  const moved = diagnosticDiagram(late);
  assertEquals(findPlateau(moved).accepted, false);
  assertEquals(findPlateau(moved, { phase_error: 0.02 }).accepted, true);
});

Deno.test("findPlateau() says when wings are lost in noise, K is too small, or velocities few", () => {
  const faint = findPlateau(diagnosticDiagram(withNoise({
    ...symmetric,
    error: symmetric.error.map(() => 1),
    grid: { ...symmetric.grid, error: symmetric.error.map(() => 1) },
  }, randomStream(1))));
  assertEquals(faint.accepted, false);
  assert(faint.reasons.join().includes("above the noise"), faint.reasons.join());
  const empty: DiagnosticDiagram = { line: "x", sigma_kms: 100, rows: [], covariance: [] };
  assertEquals(findPlateau(empty).k_range_kms, null);
  // A face-on binary: the wings do not move.
  const still = { ...symmetric, flux: symmetric.flux.map((_, n) => symmetric.flux[n % 301]!) };
  const quiet = findPlateau(diagnosticDiagram(withNoise({
    ...still,
    grid: { ...still.grid, flux: still.flux },
  }, randomStream(4))));
  assertEquals(quiet.accepted, false);
  assert(quiet.reasons.some((reason) => reason.includes("noise floor")), quiet.reasons.join());
});

Deno.test("lightCentre() of a spotted disc comes back to the axis at K1", () => {
  const clean = modelTrail(spotted(0.1, { mixing: 1 }), sampling, { error: 0.01 });
  const diagram = diagnosticDiagram(clean, {
    half_separations_kms: Array.from({ length: 12 }, (_, k) => 700 + 60 * k),
  });
  const centre = lightCentre(diagram);
  assert(Math.abs(centre.vx_kms[0]!) > 5 * Math.abs(centre.vx_kms[11]!));
  assertAlmostEquals(centre.k_accretor_kms!, K1, 3);
});

Deno.test("expectedDrift() is 1.5 v²/c and grows towards face-on", () => {
  assertAlmostEquals(expectedDrift(1500), 1.5 * 1500 ** 2 / 299792.458, 1e-9);
  assertAlmostEquals(expectedDrift(1500, { inclination_deg: 30 }), 4 * expectedDrift(1500), 1e-9);
});

Deno.test("diagnosticDiagram() refuses separations that do not rise", () => {
  for (const half_separations_kms of [[], [900, 800], [-5, 10], [NaN]]) {
    assertThrows(
      () => diagnosticDiagram(symmetric, { half_separations_kms }),
      InputError,
      "half separations",
    );
  }
});

Deno.test("wingSymmetry() finds the accretor beside a spot, with errors from resampled maps", () => {
  const pixels = 121, half_width_kms = 1800, step = 30;
  const map = (seed: number, spot: number) => {
    const random = randomStream(seed);
    const intensity = Float64Array.from({ length: pixels * pixels }, (_, n) => {
      const vx = step * (n % pixels - 60), vy = step * (Math.floor(n / pixels) - 60);
      const fast = Math.exp(-Math.hypot(vx - 4, vy + 80) / 350);
      const bright = spot * Math.exp(-((vx + 500) ** 2 + (vy - 350) ** 2) / (2 * 80 ** 2));
      return fast + bright + 0.002 * random.normal();
    });
    return { pixels, half_width_kms, intensity };
  };
  const found = wingSymmetry(map(1, 0.5), {
    wing_kms: [950, 1500],
    resampled: [2, 3, 4, 5, 6, 7, 8, 9].map((seed) => map(seed, 0.5)),
  });
  assertAlmostEquals(found.k_accretor_kms, 80, 4 * found.k_accretor_error_kms!);
  assertAlmostEquals(found.vx_kms, 4, 4 * found.vx_error_kms!);
  assert(found.k_accretor_error_kms! < 5 && found.asymmetry < 0.01);
  // Wings that take in the spot are not symmetric.
  assert(wingSymmetry(map(1, 0.5), { wing_kms: [300, 1500] }).asymmetry > 5 * found.asymmetry);
  assertThrows(() => wingSymmetry(map(1, 0), { wing_kms: [900, 1900] }), InputError, "wing_kms");
});

Deno.test("trailSymmetry() of a spotted disc's map comes near K1", () => {
  const random = randomStream(1);
  const trail = withNoise(modelTrail(spotted(0.1), sampling, { error: 0.05 }), random);
  const found = trailSymmetry(trail, { systemic_kms: GAMMA, wing_kms: [1000, 1600], random });
  // Streaks and the smoothed spot: a few km/s over 20 seeds, as its documentation warns.
  assertAlmostEquals(found.k_accretor_kms, K1, 5);
  assert(found.k_accretor_error_kms! > 0.3 && found.k_accretor_error_kms! < 3);
});

Deno.test("measureAccretor() leaves its trail alone", () => {
  const before = structuredClone(symmetric.flux);
  measureAccretor(symmetric);
  assertEquals(symmetric.flux, before);
});
