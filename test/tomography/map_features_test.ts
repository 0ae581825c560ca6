import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { randomStream } from "@millrace/millrace/numerics";
import {
  axisymmetricPart,
  blurMap,
  featurePeaks,
  makeInverter,
  mapFeatures,
  type MapFeaturesOptions,
  noiseReplica,
  partFinder,
  resampleMaps,
} from "@millrace/millrace/tomography";
import { keplerianSpeed, rimImpact, tidalRadius } from "@millrace/millrace/binary";
import { gaussianMap, gaussianTrail, plainSampling } from "./samplings.ts";

const shape = { pixels: 81, half_width_kms: 1000 };
const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };

function ringMap(spot: number): Float64Array {
  const map = gaussianMap(shape, [{ flux: spot, vx: -500, vy: 150, s1: 60, s2: 60 }]);
  return map.map((f, k) => {
    const vx = (k % 81) * 25 - 1000, vy = Math.floor(k / 81) * 25 - 1000;
    return f + 1e-4 * Math.exp(-0.5 * ((Math.hypot(vx, vy + 80) - 600) / 120) ** 2);
  });
}

Deno.test("axisymmetricPart() finds the ring and leaves a spot out when it takes the median", () => {
  const part = axisymmetricPart({ ...shape, intensity: ringMap(10) }, {
    centre: { vx_kms: 0, vy_kms: -80 },
  });
  const ring = ringMap(0);
  // Rings one pixel (25 km/s) wide on a profile of sigma 120 km/s: (25/120)² / 24 and the spread
  // of pixel distances within a ring.
  part.intensity.forEach((f, k) => assertAlmostEquals(f, ring[k]!, 0.06e-4));
});

Deno.test("axisymmetricPart() keeps the flux when it takes the mean", () => {
  const intensity = ringMap(10);
  const part = axisymmetricPart({ ...shape, intensity }, {
    centre: { vx_kms: 0, vy_kms: 0 },
    statistic: "mean",
  });
  const sum = (m: Float64Array) => m.reduce((a, b) => a + b, 0);
  assertAlmostEquals(sum(part.intensity) / sum(intensity), 1, 0.01);
});

Deno.test("blurMap() widens a Gaussian in quadrature and is its own transpose", () => {
  const sigma = 50, fwhm_kms = Math.sqrt(8 * Math.LN2) * 70;
  const map = gaussianMap(shape, [{ flux: 1, vx: 100, vy: -50, s1: sigma, s2: sigma }]);
  const wide = Math.hypot(sigma, 70);
  const expected = gaussianMap(shape, [{ flux: 1, vx: 100, vy: -50, s1: wide, s2: wide }]);
  blurMap(map, { ...shape, fwhm_kms }).forEach((f, k) =>
    assertAlmostEquals(f, expected[k]!, 1e-5 * Math.max(...expected))
  );
  const random = randomStream(3);
  const a = map.map(random.normal), b = map.map(random.normal);
  const dot = (x: Float64Array, y: Float64Array) => x.reduce((s, v, k) => s + v * y[k]!, 0);
  const left = dot(blurMap(a, { ...shape, fwhm_kms }), b);
  const right = dot(a, blurMap(b, { ...shape, fwhm_kms }));
  assertAlmostEquals(left, right, 1e-10);
  assertEquals(blurMap(a, { ...shape, fwhm_kms: 0 }), a);
});

Deno.test("mapFeatures() finds the spot on a ring with its share of the flux", () => {
  const intensity = ringMap(8);
  const before = intensity.slice();
  const [first] = mapFeatures({ ...shape, intensity }, {
    resolution_kms: 60,
    centre: { vx_kms: 0, vy_kms: -80 },
    find_part: partFinder(speeds),
  });
  assert(first !== undefined);
  assertAlmostEquals(first.vx_kms, -500, 10);
  assertAlmostEquals(first.vy_kms, 150, 10);
  assertAlmostEquals(first.flux_fraction, 8 / (intensity.reduce((a, b) => a + b) * 625), 0.005);
  assertEquals(first.vx_error_kms, null);
  assertEquals(first.significance_sigma, null);
  assertEquals(intensity, before);
});

Deno.test("mapFeatures() adds the errors of systemic velocity and phase, and knows what no disc may hold", () => {
  const intensity = ringMap(8);
  const map = { ...shape, intensity };
  const options = { resolution_kms: 60, centre: { vx_kms: 0, vy_kms: -80 } };
  const peaks = featurePeaks(map, options);
  const steady = (value: number) => Float64Array.from([value - 3, value + 3]);
  const spread = {
    count: 2,
    mean: map,
    deviation: map,
    features: peaks.map(() => ({
      vx_kms: steady(-500),
      vy_kms: steady(150),
      height: steady(1e-9),
      flux_fraction: steady(5).map((f) => f / 100),
    })),
  };
  const measure = (more: Partial<MapFeaturesOptions>) =>
    mapFeatures(map, { ...options, spread, least_sigma: 0, ...more })[0]!;
  const scatter = Math.sqrt(18);
  assertAlmostEquals(measure({}).vx_error_kms!, scatter, 1e-9);
  const gamma = measure({ systemic_error_kms: 4 });
  assertAlmostEquals(gamma.vx_error_kms!, Math.hypot(scatter, 4), 1e-9);
  const turned = measure({ phase_error: 0.01 });
  assertAlmostEquals(turned.vy_error_kms!, Math.hypot(scatter, 2 * Math.PI * 0.01 * 500), 0.5);
  assertAlmostEquals(turned.vx_error_kms!, Math.hypot(scatter, 2 * Math.PI * 0.01 * 150), 0.5);
  assertEquals(measure({}).forbidden_to_disc, null);
  assertEquals(measure({ rim_speed_kms: 450 }).forbidden_to_disc, false);
  assertEquals(measure({ rim_speed_kms: 700 }).forbidden_to_disc, true);
});

Deno.test("mapFeatures() states errors that hold, and finds nothing in noise", async () => {
  const sampling = plainSampling({
    phases: Array.from({ length: 40 }, (_, i) => i / 40),
    bins: 121,
    first_kms: -1500,
    step_kms: 25,
    sigma_kms: 35,
  });
  const spot = { flux: 6, vx: -500, vy: 150, s1: 50, s2: 50 };
  const disc = { flux: 60, vx: 0, vy: 0, s1: 350, s2: 350 };
  const noise = 0.004;
  const clean = gaussianTrail(sampling, [disc, spot]);
  const round = gaussianTrail(sampling, [disc]);
  const error = clean.map(() => noise);
  const recipe = { inversion: "back-projection", ...shape, systemic_kms: 0 } as const;
  let held = 0, spurious = 0;
  const pulls: number[] = [];
  // Seeds 1..12: a rough check that the errors are neither empty nor wild; coverage is measured elsewhere.
  for (let seed = 1; seed <= 12; seed++) {
    const random = randomStream(seed);
    const measure = async (truth: Float64Array) => {
      const trail = { sampling, ...noiseReplica({ flux: truth, error }, random) };
      const { map } = makeInverter(trail, recipe)(trail);
      const options = { resolution_kms: 82 };
      const peaks = featurePeaks(map, options);
      const spread = await resampleMaps(trail, { ...options, recipe, count: 20, seed, peaks });
      return mapFeatures(map, { ...options, spread, least_sigma: 4 });
    };
    const [first] = await measure(clean);
    if (first && Math.hypot(first.vx_kms + 500, first.vy_kms - 150) < 60) {
      held++;
      pulls.push((first.vx_kms + 500) / first.vx_error_kms!);
      assertGreater(first.significance_sigma!, 4);
    }
    spurious += (await measure(round)).length;
  }
  assertEquals(held, 12);
  assertEquals(spurious, 0);
  const rms = Math.sqrt(pulls.reduce((s, p) => s + p * p, 0) / pulls.length);
  // 12 pulls of unit scatter: 99.9 % of their rms lies in 0.45..1.66 (chi-square tails).
  assertGreater(rms, 0.45);
  assertLess(rms, 1.66);
});

Deno.test("partFinder() names rim, stream, donor, accretor and nothing", () => {
  const find = partFinder(speeds);
  const rim = rimImpact(tidalRadius(0.25)! * 0.9, speeds);
  assertEquals(find(rim.stream, 20), "rim-impact");
  assertEquals(find(rim.keplerian, 20), "rim-impact");
  const between = {
    vx_kms: 0.5 * (rim.stream.vx_kms + rim.keplerian.vx_kms),
    vy_kms: 0.5 * (rim.stream.vy_kms + rim.keplerian.vy_kms),
  };
  assertEquals(find(between, 20), "rim-impact");
  const late = rimImpact(0.12, speeds);
  assertEquals(find(late.stream, 20), "stream");
  assertEquals(find({ vx_kms: 0, vy_kms: 320 }, 1), "donor-face");
  assertEquals(find({ vx_kms: 5, vy_kms: -80 }, 20), "accretor");
  const far = keplerianSpeed(0.3, speeds);
  assertEquals(find({ vx_kms: far, vy_kms: -300 }, 20), "none");
});
