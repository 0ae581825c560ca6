import { assert, assertAlmostEquals, assertGreater, assertLess } from "@std/assert";
import { keplerianSpeed } from "@millrace/millrace/binary";
import {
  type DiscModel,
  discProfile,
  type DiscShape,
  type Model,
  rotationProfile,
  shearStrength,
  synthesize,
} from "@millrace/millrace/synthesis";
import { bins, numbers, profileCases } from "./reference.ts";
import { binary, evenSampling, moments, orbit, row } from "./samplings.ts";

/** A disc in the reference's units, and the velocity of u = 1. */
function referenceDisc(inner: number, beta: number, more: DiscModel = {}): [Model, number] {
  const outer_radius_over_a = 0.3;
  const disc = {
    equivalent_width_kms: 1,
    inner_radius_over_a: inner * outer_radius_over_a,
    outer_radius_over_a,
    emissivity_index: beta,
    ...more,
  };
  return [{ parts: ["disc"], disc }, keplerianSpeed(outer_radius_over_a, binary)];
}

/** Means of a model over bins at phase 0, where the accretor is at rest: one exposure per bin. */
function binMeans(
  model: Model,
  bins: readonly (readonly [low: number, high: number])[],
  sigma_kms: number,
): number[] {
  const start = [0];
  const velocity: number[] = [];
  for (const [low, high] of bins) {
    const count = Math.ceil((high - low) / (sigma_kms / 3)) + 8;
    for (let k = 0; k < count; k++) velocity.push(low + (high - low) * (k + 0.5) / count);
    start.push(velocity.length);
  }
  const count = bins.length;
  const sampling = {
    count,
    phase: new Float64Array(count),
    cycle: new Float64Array(count),
    phase_width: new Float64Array(count),
    start: Uint32Array.from(start),
    velocity_kms: Float64Array.from(velocity),
    pixel_kms: new Float64Array(velocity.length).fill(1),
    profile_sigma_kms: new Float64Array(count).fill(sigma_kms),
  };
  const flux = synthesize(model, { binary, sampling });
  return bins.map((_, i) => {
    const samples = row(flux, sampling, i);
    return samples.reduce((sum, value) => sum + value, 0) / samples.length;
  });
}

Deno.test("synthesize() of a thin disc gives the reference bins", () => {
  // reference/profiles.json disc_thin: scipy quadrature; "a synthesis by summing": 1e-3 of the peak.
  for (const c of profileCases("disc_thin")) {
    const [model, unit] = referenceDisc(Number(c.r_in), Number(c.beta));
    const peak = Math.max(...numbers(c.f));
    const edges = bins(c.bins).map(([low, high]) => [low * unit, high * unit] as const);
    // So narrow that what it moves across the edges of the bins is below the tolerance.
    const means = binMeans(model, edges, 0.004 * unit);
    for (const [k, mean] of means.entries()) {
      assertAlmostEquals(mean * unit, numbers(c.bin_mean_f)[k]!, 1e-3 * peak, `${c.id} bin ${k}`);
    }
  }
});

Deno.test("synthesize() of a thin disc gives what the reference's pixels record", () => {
  // reference/profiles.json pixel_disc: scipy; "a synthesis by summing": 1e-3 of the peak.
  for (const c of profileCases("pixel_disc")) {
    const [model, unit] = referenceDisc(Number(c.r_in), Number(c.beta));
    const scale = unit / Number(c.v_out);
    const expected = numbers(c.pixel_mean);
    const edges = numbers(c.edges).map((edge) => (edge - Number(c.gamma)) * scale);
    const pixels = expected.map((_, k) => [edges[k]!, edges[k + 1]!] as const);
    const means = binMeans(model, pixels, Number(c.s) * scale);
    for (const [k, value] of expected.entries()) {
      assertAlmostEquals(means[k]! * scale, value, 1e-3 * Math.max(...expected), `${c.id} ${k}`);
    }
  }
});

/** A profile by quadrature, convolved with a Gaussian by the trapezium rule. */
function blurred(
  profile: (u: number) => number,
  { velocity, unit, sigma }: { velocity: number; unit: number; sigma: number },
): number {
  const step = sigma / 400;
  let sum = 0;
  for (let x = -6 * sigma; x <= 6 * sigma; x += step) {
    sum += profile((velocity - x) / unit) * Math.exp(-0.5 * (x / sigma) ** 2);
  }
  return sum * step / (Math.sqrt(2 * Math.PI) * sigma * unit);
}

Deno.test("synthesize() of thin and thick discs agrees with the slow profile seen through a Gaussian", () => {
  const sigma = 40;
  for (
    const [inner, beta, inclination_deg] of [[0.1, 1.5, 0], [0.1, 1.5, 60], [0.2, 2, 80]] as const
  ) {
    const thick = inclination_deg > 0;
    const [model, unit] = referenceDisc(inner, beta, { optical_depth: thick ? "thick" : "thin" });
    const velocities = [0, 150, 400, 0.96 * unit, unit, 1.04 * unit, 1.5 * unit];
    const sampling = { ...evenSampling([0]), start: Uint32Array.of(0, velocities.length) };
    const flux = synthesize(model, {
      binary: { ...binary, inclination_deg },
      sampling: {
        ...sampling,
        velocity_kms: Float64Array.from(velocities),
        pixel_kms: new Float64Array(velocities.length).fill(1),
      },
    });
    const shape: DiscShape = {
      inner_over_outer: inner,
      emissivity_index: beta,
      shear: thick ? shearStrength(inclination_deg, 2) : 0,
    };
    const peak = Math.max(...flux);
    for (const [k, velocity] of velocities.entries()) {
      const slow = blurred((u) => discProfile(u, shape), { velocity, unit, sigma });
      // The trapezium rule across the cusp costs the slow one 1e-4.
      assertAlmostEquals(flux[k]!, slow, 2e-4 * peak, `${inclination_deg} deg at ${velocity}`);
    }
  }
});

Deno.test("synthesize() of a disc peaks at the rim's velocity and ends at the inner edge's", () => {
  // Smak 1981, Acta Astr. 31, 395: peaks at the outer edge's projected velocity, wings to the inner.
  const sampling = evenSampling([0], { half_kms: 2500, step_kms: 1, sigma_kms: 3 });
  const flux = synthesize({ parts: ["disc"] }, { binary, sampling });
  const top = flux.indexOf(Math.max(...flux));
  // The cusp is steeper inside than outside, so a Gaussian moves its peak outwards by about σ.
  assertAlmostEquals(Math.abs(sampling.velocity_kms[top]!), keplerianSpeed(0.3, binary), 2 * 3);
  const inner = keplerianSpeed(0.05, binary);
  const outside = flux.filter((_, n) => Math.abs(sampling.velocity_kms[n]!) > inner + 18);
  assertLess(Math.max(...outside), 1e-12);
  const within = flux.filter((_, n) => Math.abs(sampling.velocity_kms[n]!) < inner - 18);
  assertGreater(Math.min(...within), 0);
});

Deno.test("synthesize() of a disc follows the accretor", () => {
  const sampling = evenSampling(orbit(8));
  const flux = synthesize({ parts: ["disc"] }, { binary, sampling });
  for (let i = 0; i < 8; i++) {
    // The accretor is at (0, −K1): V = −K1 sin 2πφ.
    const { mean, light } = moments(flux, sampling, i);
    assertAlmostEquals(mean, -70 * Math.sin(2 * Math.PI * i / 8), 1e-3);
    assertAlmostEquals(light, 3000, 1e-4 * 3000);
  }
});

Deno.test("synthesize() keeps the light of a disc under smearing, turbulence and patterns", () => {
  const sampling = evenSampling([0.1, 0.37], { phase_width: 0.08, half_kms: 4000 });
  const models: DiscModel[] = [
    { turbulence_kms: 60, turbulence_index: 1 },
    { one_armed_amplitude: 0.5, one_armed_deg: 40 },
    { two_armed_amplitude: 0.7, two_armed_deg: 130, two_armed_pitch_deg: 15 },
    { optical_depth: "thick" },
    { optical_depth: "thick", one_armed_amplitude: 0.5, two_armed_amplitude: 0.4 },
    { keplerian_factor: 0.85 },
  ];
  for (const disc of models) {
    const flux = synthesize({ parts: ["disc"], disc }, { binary, sampling });
    for (const i of [0, 1]) {
      // Cubic deposit and look-up: 1e-4 of the peak.
      assertAlmostEquals(moments(flux, sampling, i).light, 3000, 0.3, JSON.stringify(disc));
    }
  }
});

Deno.test("synthesize() of a turbulent disc is the convolution of its rings", () => {
  const sampling = evenSampling([0], { sigma_kms: 30 });
  const quiet = evenSampling([0], { sigma_kms: 50 });
  const turbulent = { parts: ["disc"], disc: { turbulence_kms: 40 } } as const;
  const flux = synthesize(turbulent, { binary, sampling });
  const broad = synthesize({ parts: ["disc"] }, { binary, sampling: quiet });
  // 30 and 40 km/s add up to 50; the grids differ, each good to 1e-4.
  for (const [n, value] of flux.entries()) assertAlmostEquals(value, broad[n]!, 2e-4);
});

Deno.test("synthesize() of a disc turbulent inside has wings broader than one turbulent outside", () => {
  const sampling = evenSampling([0], { half_kms: 4000 });
  const spread = (turbulence_index: number, turbulence_kms: number) =>
    moments(
      synthesize({ parts: ["disc"], disc: { turbulence_kms, turbulence_index } }, {
        binary,
        sampling,
      }),
      sampling,
      0,
    ).sigma;
  const none = spread(0, 0);
  // Variances add: ∫ j σ² over the disc. With p = ½ σ² ∝ 1/r; for β = 1.5 the light is ∝ r^−½ dr.
  const [a, b] = [0.05 / 0.3, 1];
  const mean = 60 ** 2 * ((a ** -0.5 - b ** -0.5) / 0.5) / ((b ** 0.5 - a ** 0.5) / 0.5);
  assertAlmostEquals(spread(0.5, 60) ** 2, none ** 2 + mean, 1e-4 * none ** 2);
});

Deno.test("synthesize() of an m = 1 pattern shifts light with phase, m = 2 does not", () => {
  const sampling = evenSampling(orbit(12));
  const means = (disc: DiscModel) => {
    const flux = synthesize({ parts: ["disc"], disc }, { binary, sampling });
    return orbit(12).map((phase, i) =>
      moments(flux, sampling, i).mean + 70 * Math.sin(2 * Math.PI * phase)
    );
  };
  // Brightest at azimuth 0, where gas moves along +Vy: the mean is A/2 ⟨v⟩ sin 2πφ.
  const lopsided = means({ one_armed_amplitude: 0.4 });
  const top = Math.max(...lopsided);
  for (const [i, mean] of lopsided.entries()) {
    assertAlmostEquals(mean, top * Math.sin(2 * Math.PI * i / 12), 1e-3 * top);
  }
  const [a, b] = [0.05 / 0.3, 1];
  const speed = keplerianSpeed(0.3, binary) * Math.log(b / a) / (2 * (b ** 0.5 - a ** 0.5));
  assertAlmostEquals(top, 0.2 * speed, 1e-3 * top);
  for (const mean of means({ two_armed_amplitude: 0.4 })) assertAlmostEquals(mean, 0, 0.01);
});

Deno.test("synthesize() of a disc repeats mirrored half an orbit later", () => {
  const sampling = evenSampling([0.13, 0.63]);
  const disc = { two_armed_amplitude: 0.5, two_armed_deg: 20, one_armed_amplitude: 0.3 };
  const flux = synthesize({ parts: ["disc"], disc }, { binary, sampling });
  const first = row(flux, sampling, 0), second = row(flux, sampling, 1).reverse();
  for (const [n, value] of first.entries()) assertAlmostEquals(value, second[n]!, 1e-9);
});

Deno.test("synthesize() of an absorption core is the rotation kernel, and takes its light away", () => {
  const sampling = evenSampling([0], { step_kms: 5, sigma_kms: 8 });
  const base = { parts: ["disc"], disc: {} } as const;
  const core = { core_equivalent_width_kms: 400, core_radius_over_a: 0.12 };
  const without = synthesize(base, { binary, sampling });
  const flux = synthesize({ ...base, disc: core }, { binary, sampling });
  const half = keplerianSpeed(0.3, binary) * 0.12 / 0.3;
  const tolerance = 5e-4 * 400 / half;
  for (const [n, velocity] of sampling.velocity_kms.entries()) {
    // reference/profiles.json rotation with ε = 0 holds the kernel itself (Gray).
    const kernel = blurred((x) => rotationProfile(x, 0), { velocity, unit: half, sigma: 8 });
    assertAlmostEquals(without[n]! - flux[n]!, 400 * kernel, tolerance, `${velocity}`);
  }
  assert(moments(flux, sampling, 0).light < 2601);
});
