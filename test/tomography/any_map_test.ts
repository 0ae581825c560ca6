import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { kolmogorovSmirnov, randomStream } from "@millrace/millrace/numerics";
import {
  canAnyMapFit,
  makeProjector,
  mirrorTest,
  momentTest,
  profileMoments,
  ringKernels,
  systemicByParity,
  type TrailSamples,
} from "@millrace/millrace/tomography";
import { gaussianMap, gaussianTrail, plainSampling, ragged } from "./samplings.ts";

const PHASES = Array.from({ length: 24 }, (_, i) => (i + 0.2 * Math.sin(5 * i)) / 24);
const sampling = plainSampling({
  phases: PHASES,
  bins: 91,
  first_kms: -1125,
  step_kms: 25,
  sigma_kms: 30,
  phase_width: 0.02,
});
const shape = { pixels: 61, half_width_kms: 750, systemic_kms: 20 };
const NOISE = 0.03;

const DISC = gaussianMap(shape, [
  ...Array.from({ length: 48 }, (_, i) => ({
    flux: 6,
    vx: 420 * Math.cos(i / 48 * 2 * Math.PI),
    vy: 420 * Math.sin(i / 48 * 2 * Math.PI) - 50,
    s1: 60,
    s2: 60,
  })),
  { flux: 30, vx: -350, vy: 150, s1: 45, s2: 45 },
]);
const CLEAN = makeProjector(sampling, shape).forward(DISC);

function observed(clean: Float64Array, seed: number): TrailSamples {
  const random = randomStream(seed);
  return {
    sampling,
    flux: clean.map((f) => f + NOISE * random.normal()),
    error: clean.map(() => NOISE),
  };
}

/** Uniform p-values give this or less once in a thousand runs of the test; seeds are fixed. */
const LEAST_KS = 1e-3;

Deno.test("momentTest() and systemicByParity() are calibrated on data from a map, seeds 1 to 200", () => {
  const p: number[] = [], pulls: number[] = [];
  for (let seed = 1; seed <= 200; seed++) {
    const trail = observed(CLEAN, seed);
    const range = { systemic_kms: 20, half_range_kms: 1080 };
    p.push(momentTest(trail, range).p_value);
    const found = systemicByParity(trail, { ...range, systemic_kms: 0 });
    assert(found !== null);
    pulls.push((found.systemic_kms - 20) / found.error_kms);
  }
  assertGreater(kolmogorovSmirnov(p).probability, LEAST_KS);
  const held = pulls.filter((x) => Math.abs(x) < 1).length / 200;
  // 68.3 % ± 3.3 % in 200 trials: three of these either way.
  assertAlmostEquals(held, 0.683, 0.1);
  assertAlmostEquals(pulls.reduce((a, b) => a + b, 0) / 200, 0, 3 / Math.sqrt(200));
});

Deno.test("momentTest() and mirrorTest() are calibrated on a strong line whose continuum levels are off, seeds 1 to 200", () => {
  // What divides the line's light is off, too: an error of the level multiplies line and continuum.
  const OFF = 0.02;
  const continuum_error = new Float64Array(sampling.count).fill(OFF);
  const moments: number[] = [], mirror: number[] = [];
  const line = CLEAN.map((f) => 6 * f);
  for (let seed = 1; seed <= 200; seed++) {
    const random = randomStream(seed, 1);
    const levels = PHASES.map(() => 1 + OFF * random.normal());
    const trail = observed(line.map((f, k) => (1 + f) * levels[Math.floor(k / 91)]! - 1), seed);
    const range = { systemic_kms: 20, half_range_kms: 1080, continuum_error };
    moments.push(momentTest(trail, range).p_value);
    mirror.push(mirrorTest(trail, { ...range, model: line })!.p_value);
  }
  assertGreater(kolmogorovSmirnov(moments).probability, LEAST_KS);
  assertGreater(kolmogorovSmirnov(mirror).probability, LEAST_KS);
});

Deno.test("canAnyMapFit() gives uniform probabilities on data from a map, seeds 1 to 40", () => {
  const p = { moments: [] as number[], mirror: [] as number[], core: [] as number[] };
  let warned = 0;
  for (let seed = 1; seed <= 40; seed++) {
    const found = canAnyMapFit(observed(CLEAN, seed), {
      ...shape,
      seed: 1000 + seed,
      simulations: 8,
    });
    p.moments.push(found.moments!.p_value);
    p.mirror.push(found.mirror!.p_value);
    p.core.push(found.core.p_value);
    warned += found.warnings.length;
  }
  for (const values of Object.values(p)) {
    assertGreater(kolmogorovSmirnov(values).probability, LEAST_KS);
  }
  // 160 chances of 0.001 to 0.003 each.
  assertLess(warned, 4);
});

/** A ring's profile with brightness (1 + (2 sin i tan i sin θ cos θ)²)^½ along it: Horne & Marsh 1986. */
function shearBroadened(inclination_deg: number): Float64Array {
  const sine = Math.sin(inclination_deg * Math.PI / 180);
  const stretch = 2 * sine * Math.tan(inclination_deg * Math.PI / 180);
  const directions = 720;
  let total = 0;
  const flux = sampling.velocity_kms.map((v) => {
    let sum = 0;
    for (let d = 0; d < directions; d++) {
      const theta = 2 * Math.PI * (d + 0.5) / directions;
      const q = Math.hypot(1, stretch * Math.sin(theta) * Math.cos(theta));
      for (let r = 0; r < 6; r++) {
        const z = (v - 20 - (380 + 50 * r) * Math.sin(theta)) / 30;
        sum += q * Math.exp(-0.5 * z * z);
      }
    }
    return sum;
  });
  for (let k = 0; k < 91; k++) total += 25 * flux[k]!;
  return flux.map((f) => 320 * f / total);
}

Deno.test("canAnyMapFit() finds a shear-broadened core, which mirrors itself and has fitting moments", () => {
  const found = canAnyMapFit(observed(shearBroadened(75), 1), { ...shape, seed: 1 });
  assertLess(found.core.p_value, 1e-4);
  assertLess(found.core.miss_over_peak, -0.03);
  assertGreater(found.mirror!.p_value, 1e-3);
  assertGreater(found.moments!.p_value, 1e-3);
  assertEquals(found.warnings.map((w) => w.code), ["core-fails"]);
});

Deno.test("canAnyMapFit() finds modulated emission, which passes the core test", () => {
  const spot = gaussianMap(shape, [{ flux: 40, vx: -350, vy: 250, s1: 50, s2: 50 }]);
  const seen = makeProjector(sampling, shape).forward(spot);
  const modulated = CLEAN.map((f, k) =>
    f + seen[k]! * Math.cos(2 * Math.PI * (PHASES[Math.floor(k / 91)]! - 0.1))
  );
  const found = canAnyMapFit(observed(modulated, 1), { ...shape, seed: 1 });
  assertLess(found.mirror!.p_value, 1e-4);
  assertLess(found.moments!.p_value, 1e-4);
  assertGreater(found.core.p_value, 1e-3);
  const codes = found.warnings.map((w) => w.code);
  assert(codes.includes("mirror-fails") && codes.includes("moments-fail"));
  // The cell that breaks it lies on the spot's curve.
  const { phase, velocity_kms } = found.mirror!.worst;
  const angle = 2 * Math.PI * phase;
  assertAlmostEquals(velocity_kms, 350 * Math.cos(angle) + 250 * Math.sin(angle), 150);
});

Deno.test("canAnyMapFit() says when parity asks for another systemic velocity", () => {
  const found = canAnyMapFit(observed(CLEAN, 1), { ...shape, systemic_kms: 60, seed: 1 });
  assert(found.warnings.some((w) => w.code === "systemic-velocity-disagrees"));
  assertAlmostEquals(found.systemic!.systemic_kms, 20, 5);
});

Deno.test("canAnyMapFit() leaves its trail alone and is the same twice", () => {
  const trail = observed(CLEAN, 3);
  const before = structuredClone(trail);
  const options = { ...shape, seed: 5, simulations: 4 };
  assertEquals(canAnyMapFit(trail, options), canAnyMapFit(trail, options));
  assertEquals(trail, before);
});

Deno.test("profileMoments() gives the moments of blobs in closed form on ragged exposures", () => {
  const random = randomStream(9);
  const uneven = ragged(6, random.uniform);
  const blob = { flux: 50, vx: 200, vy: -150, s1: 70, s2: 70 };
  const still = { ...uneven, phase_width: new Float64Array(6) };
  const flux = gaussianTrail(still, [blob], 12);
  const found = profileMoments({ sampling: still, flux, error: flux.map(() => 0.01) }, {
    systemic_kms: 12,
    half_range_kms: 700,
  });
  assertGreater(found.length, 2);
  for (const { exposure, moment } of found) {
    const angle = 2 * Math.PI * still.phase[exposure]!;
    const centre = -blob.vx * Math.cos(angle) + blob.vy * Math.sin(angle);
    // Samples of about 30 km/s stand for their pixels: the sum is good to the jitter of their widths.
    assertAlmostEquals(moment[0]! / 50, 1, 0.02);
    assertAlmostEquals(moment[1]! * 700 / 50, centre, 6);
    assertAlmostEquals(moment[2]! * 700 ** 2 / 50, centre ** 2 + 70 ** 2, 2500);
  }
});

Deno.test("profileMoments() bridges a masked sample and leaves out an exposure with a wide gap", () => {
  const trail = observed(CLEAN, 2);
  const narrow = trail.error.slice(), wide = trail.error.slice();
  narrow[40] = Infinity;
  wide.fill(Infinity, 40, 50);
  const range = { systemic_kms: 20, half_range_kms: 1080 };
  const whole = profileMoments(trail, range);
  const bridged = profileMoments({ ...trail, error: narrow }, range);
  assertEquals(bridged.length, 24);
  assertAlmostEquals(bridged[0]!.moment[0]!, whole[0]!.moment[0]!, 25 * 3 * NOISE);
  assertEquals(profileMoments({ ...trail, error: wide }, range).map((m) => m.exposure)[0], 1);
});

Deno.test("ringKernels() gives the arcsine density blurred, of unit area", () => {
  const edges_kms = Float64Array.from({ length: 61 }, (_, b) => 20 * b);
  const kernel = ringKernels({
    rings_kms: Float64Array.of(499.9, 500.1),
    edges_kms,
    sigma_kms: [30, 40],
    weight: [0.5, 0.5],
  });
  assertAlmostEquals(2 * kernel.reduce((a, b) => a + b, 0) * 20, 1, 1e-6);
  // The same density by a plain mean over 20 000 directions.
  for (const b of [0, 10, 24, 27]) {
    let sum = 0;
    const directions = 2000;
    for (let d = 0; d < directions; d++) {
      for (let p = 0; p < 20; p++) {
        const v = edges_kms[b]! + p + 0.5;
        const u = 500 * Math.cos((d + 0.5) / directions * Math.PI);
        for (const s of [30, 40]) {
          sum += Math.exp(-0.5 * ((v - u) / s) ** 2) / (Math.sqrt(2 * Math.PI) * s) / 2;
        }
      }
    }
    assertAlmostEquals(kernel[b]! / (sum / (directions * 20)), 1, 2e-3);
  }
});
