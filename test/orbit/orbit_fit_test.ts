import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { trueAnomaly } from "@millrace/millrace/binary";
import { InputError } from "@millrace/millrace/errors";
import { type RandomStream, randomStream } from "@millrace/millrace/numerics";
import {
  circularVelocity,
  fitCircular,
  fitEccentric,
  fitOrbit,
  smearFactor,
  type TracedStar,
  type VelocityCurve,
} from "@millrace/millrace/orbit";
import { casesOf } from "./reference.ts";

function curveOf(
  orbits: Float64Array,
  velocity: (x: number) => number,
  options: { error: number; star?: TracedStar; random?: RandomStream; exposure?: number },
): VelocityCurve {
  const { error, star = "donor", random, exposure = 0 } = options;
  return {
    line: "Na I 8190",
    method: "cross-correlation",
    star,
    orbits,
    exposure_orbits: new Float64Array(orbits.length).fill(exposure),
    velocity_kms: orbits.map((x) => velocity(x) + (random ? error * random.normal() : 0)),
    error_kms: new Float64Array(orbits.length).fill(error),
  };
}

const sine = (k: number, zero = 0, gamma = 0, period = 1) => (x: number) =>
  gamma + k * Math.sin(2 * Math.PI * (x / period - zero));

const night = Float64Array.from({ length: 45 }, (_, k) => 0.07 * k + (k > 22 ? 12 : 0));

Deno.test("fitCircular() gives the reference sine fits, errors and scaled errors", () => {
  // reference/stats.json kind sine_fit: weighted linear least squares (numpy)
  for (const c of casesOf("stats", "sine_fit")) {
    const curve: VelocityCurve = {
      line: "x",
      method: "reference",
      star: "donor",
      orbits: Float64Array.from(c.x),
      exposure_orbits: new Float64Array(c.x.length),
      velocity_kms: Float64Array.from(c.v),
      error_kms: Float64Array.from(c.err),
    };
    const fit = fitCircular(curve, { scatter: "stated" });
    const close = (value: number, expected: number) =>
      assertAlmostEquals(value, expected, 1e-9 * c.K, c.id);
    close(fit.systemic_kms, c.gamma);
    close(fit.k_kms, c.K);
    assertAlmostEquals(fit.chi_square / c.chi2, 1, 1e-9, c.id);
    const turn = fit.crossing_phase - c.phi0;
    assertAlmostEquals(turn - Math.round(turn), 0, 1e-9, c.id);
    const errors = [fit.systemic_error_kms, fit.k_error_kms, fit.crossing_phase_error];
    errors.forEach((error, k) =>
      assertAlmostEquals(error / c.errors_gamma_K_phi0[k], 1, 1e-9, c.id)
    );
    for (let i = 0; i < 3; i++) {
      close(fit.harmonics_kms[i]!, c.gamma_A_B[i]);
      for (let j = 0; j < 3; j++) {
        const size = Math.sqrt(c.covariance[i][i] * c.covariance[j][j]);
        assertAlmostEquals((fit.covariance.get(i, j) - c.covariance[i][j]) / size, 0, 1e-9, c.id);
      }
    }
    const scaled = fitCircular(curve, { scatter: "scale" });
    const factor = Math.max(1, c.scaled_errors[1] / c.errors_gamma_K_phi0[1]);
    assertAlmostEquals(scaled.k_error_kms / (factor * c.errors_gamma_K_phi0[1]), 1, 1e-9, c.id);
  }
});

Deno.test("fitCircular() puts back the amplitude that long exposures lose", () => {
  const exposure = 0.15;
  const mean = (x: number) => {
    let sum = 0;
    for (let k = 0; k < 1000; k++) {
      sum += sine(300, 0.02, 12)(x + exposure * ((k + 0.5) / 1000 - 0.5));
    }
    return sum / 1000;
  };
  const curve = curveOf(night, mean, { error: 5, exposure });
  const fit = fitCircular(curve);
  assertAlmostEquals(fit.k_kms, 300, 0.01);
  assertAlmostEquals(circularVelocity(fit, 0.3, { exposure_orbits: exposure }), mean(0.3), 0.01);
  const plain = fitCircular(curve, { smear: false });
  assertAlmostEquals(plain.k_kms, 300 * smearFactor(exposure), 0.01);
});

Deno.test("fitCircular() adds jitter until chi-square fits, and never less than none", () => {
  const random = randomStream(3);
  const curve = curveOf(night, sine(300), { error: 10, random });
  const tight = { ...curve, error_kms: curve.error_kms.map(() => 3) };
  const fit = fitCircular(tight);
  assertAlmostEquals(Math.hypot(fit.jitter_kms, 3), 10, 2.5); // 42 degrees of freedom: 11 %
  const scaled = fitCircular(tight, { scatter: "scale" });
  assertAlmostEquals(scaled.error_scale * 3, Math.hypot(fit.jitter_kms, 3), 0.01);
  assertAlmostEquals(scaled.k_error_kms, fit.k_error_kms, 1e-4);
  const loose = fitCircular({ ...curve, error_kms: curve.error_kms.map(() => 40) });
  assertEquals(loose.jitter_kms, 0);
});

Deno.test("fitCircular() with the robust option forgets outliers", () => {
  const random = randomStream(8);
  const curve = curveOf(night, sine(300, 0, 20), { error: 10, random });
  const hit = {
    ...curve,
    velocity_kms: curve.velocity_kms.map((v, k) => k % 11 === 5 ? v + 600 : v),
  };
  const robust = fitCircular(hit, { robust: true });
  assertAlmostEquals(robust.k_kms, 300, 4 * robust.k_error_kms);
  assertAlmostEquals(robust.systemic_kms, 20, 4 * robust.systemic_error_kms);
  assertEquals(robust.outliers, 4);
  assert(Math.abs(fitCircular(hit).systemic_kms - 20) > 20);
});

Deno.test("fitCircular() leaves unmeasured exposures out and its input alone", () => {
  const curve = curveOf(night, sine(300), { error: 10 });
  const gaps = {
    ...curve,
    velocity_kms: curve.velocity_kms.map((v, k) => k === 3 ? NaN : v),
    error_kms: curve.error_kms.map((e, k) => k === 3 || k === 7 ? Infinity : e),
  };
  const before = structuredClone(gaps);
  assertEquals(fitCircular(gaps).sample_count, 43);
  assertEquals(gaps, before);
});

Deno.test("fitCircular() refuses few velocities, one phase only and bad errors", () => {
  const few = curveOf(night.slice(0, 4), sine(300), { error: 10 });
  assertThrows(() => fitCircular(few), InputError, "at least 5 velocities");
  const bunched = curveOf(Float64Array.from({ length: 12 }, (_, k) => 0.3 + 0.002 * k), sine(300), {
    error: 10,
  });
  assertThrows(() => fitCircular(bunched), InputError, 'current value is "0.300 to 0.322" cycles');
  const same = curveOf(new Float64Array(12).fill(0.3), sine(300), { error: 10 });
  assertThrows(() => fitCircular(same), InputError, "phases must spread");
  const zero = { ...curveOf(night, sine(300), { error: 10 }), error_kms: new Float64Array(45) };
  assertThrows(() => fitCircular(zero), InputError, "errors of Na I 8190");
});

Deno.test("fitOrbit() finds period and conjunction of one star and of both", () => {
  const donor = curveOf(night, sine(320, 0.013, 25, 1.0004), { error: 5 });
  const alone = fitOrbit([donor]);
  assertAlmostEquals(alone.period_ratio, 1.0004, 1e-8);
  // zeros at (0.013 + n)·1.0004
  const n = Math.round(alone.conjunction_orbits / 1.0004 - 0.013);
  assertAlmostEquals(alone.conjunction_orbits, (0.013 + n) * 1.0004, 1e-7);
  const accretor = curveOf(night, sine(60, 0.513, 31, 1.0004), { error: 5, star: "accretor" });
  const both = fitOrbit([accretor, donor]);
  assertAlmostEquals(both.stars[0]!.k_kms, 60, 1e-5);
  assertAlmostEquals(both.stars[1]!.k_kms, 320, 1e-5);
  assertAlmostEquals(both.stars[0]!.systemic_kms, 31, 1e-5);
  assertAlmostEquals(both.conjunction_orbits, alone.conjunction_orbits, 1e-6);
  assertLess(both.conjunction_error_orbits, alone.conjunction_error_orbits);
  const shared = fitOrbit([accretor, donor], { systemic: "shared", scatter: "stated" });
  assertAlmostEquals(shared.stars[0]!.systemic_kms, 28, 0.5);
  assertEquals(shared.stars[0]!.systemic_kms, shared.stars[1]!.systemic_kms);
  assertEquals(shared.degrees_of_freedom, 90 - 5);
});

Deno.test("fitOrbit() holds the period when data span under two orbits, and says so", () => {
  const short = curveOf(Float64Array.from({ length: 30 }, (_, k) => 0.06 * k), sine(300), {
    error: 5,
  });
  const fit = fitOrbit([short]);
  assertEquals(fit.period, "held: data span under two orbits");
  assertEquals([fit.period_ratio, fit.period_ratio_error], [1, 0]);
  assertAlmostEquals(fit.stars[0]!.k_error_kms, fitCircular(short).k_error_kms, 1e-3);
  assertEquals(
    fitOrbit([curveOf(night, sine(300), { error: 5 })], { period: "held" }).period,
    "held as asked",
  );
});

Deno.test("fitOrbit() weighs a period known beforehand", () => {
  const curve = curveOf(night, sine(320, 0, 0, 1.003), { error: 20 });
  const own = fitOrbit([curve]);
  const prior = fitOrbit([curve], { period_prior: own.period_ratio_error });
  assertAlmostEquals(prior.period_ratio - 1, (own.period_ratio - 1) / 2, 2e-5);
  assertAlmostEquals(prior.period_ratio_error / own.period_ratio_error, Math.SQRT1_2, 0.01);
});

Deno.test("fitOrbit() refuses two curves of one star", () => {
  const curve = curveOf(night, sine(300), { error: 5 });
  assertThrows(() => fitOrbit([curve, curve]), InputError, "one of each star");
  assertThrows(() => fitOrbit([]), InputError, "one of each star");
});

Deno.test("fitEccentric() recovers an eccentric orbit", () => {
  const e = 0.35, omega = 40 * Math.PI / 180, periastron = 0.2;
  const velocity = (x: number) => {
    const nu = trueAnomaly(2 * Math.PI * (x - periastron), e);
    return 10 + 100 * (Math.cos(nu + omega) + e * Math.cos(omega));
  };
  const fit = fitEccentric(curveOf(night, velocity, { error: 1, random: randomStream(2) }));
  assert(fit.significant);
  assertAlmostEquals(fit.eccentricity, e, 4 * fit.eccentricity_error);
  assertAlmostEquals(fit.periastron_deg, 40, 3);
  assertAlmostEquals(fit.periastron_phase, periastron, 0.01);
  assertAlmostEquals(fit.k_kms, 100, 2);
  assertAlmostEquals(fit.systemic_kms, 10, 1);
});

Deno.test("fitEccentric() calls a circular orbit eccentric in about 5 per cent of trials", () => {
  // Seeds 1..120: the share of p < 0.05 has a standard deviation of 2 per cent.
  let significant = 0;
  for (let seed = 1; seed <= 120; seed++) {
    const random = randomStream(seed);
    if (fitEccentric(curveOf(night, sine(300), { error: 20, random })).significant) significant++;
  }
  assert(significant >= 1 && significant <= 14, `${significant} of 120`);
});

Deno.test("velocity curves: 68 per cent intervals of P, K, γ hold the truth in 60 to 76 of 100", () => {
  // Seeds 1..200; 3.3 per cent is one standard deviation of the share.
  const held = { k: 0, gamma: 0, period: 0, conjunction: 0 };
  const pull = { k: 0, gamma: 0, period: 0, conjunction: 0 };
  const seeds = 200;
  for (let seed = 1; seed <= seeds; seed++) {
    const random = randomStream(seed);
    const fit = fitOrbit([curveOf(night, sine(90, 0, -20, 1.0002), { error: 25, random })]);
    const star = fit.stars[0]!;
    const pulls = {
      k: (star.k_kms - 90) / star.k_error_kms,
      gamma: (star.systemic_kms + 20) / star.systemic_error_kms,
      period: (fit.period_ratio - 1.0002) / fit.period_ratio_error,
      conjunction: (fit.conjunction_orbits - 1.0002 * Math.round(fit.conjunction_orbits / 1.0002)) /
        fit.conjunction_error_orbits,
    };
    for (const key of ["k", "gamma", "period", "conjunction"] as const) {
      if (Math.abs(pulls[key]) < 1) held[key]++;
      pull[key] += pulls[key] / seeds;
    }
  }
  for (const key of ["k", "gamma", "period", "conjunction"] as const) {
    const share = held[key] / seeds;
    assert(share >= 0.6 && share <= 0.76, `${key}: ${share}`);
    assertLess(Math.abs(pull[key]), 0.25, key);
  }
});
