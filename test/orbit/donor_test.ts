import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  backProjectCorrelation,
  broadenTemplate,
  type DonorTemplate,
  donorVelocities,
  fitCircular,
  fitOrbit,
  gaussianTemplate,
  matchExposures,
  measureDonor,
  orbitalSmear,
  spectrumTemplate,
  subtractTemplates,
} from "@millrace/millrace/orbit";
import type { Spectrum } from "@millrace/millrace/spectra";
import type { Trail } from "@millrace/millrace/trail";
import { donorTrail, exposures, SODIUM, withNoise } from "./simulated_trail.ts";

const K2 = 340, GAMMA = -15;
const sampling = exposures({ count: 60, reach_kms: 1500, pixel_kms: 25, sigma_kms: 40 });
const options = { components_vacuum_angstrom: SODIUM };
const bright = donorTrail(sampling, { error: 0.05 });
const template = gaussianTemplate(bright.line, { ...options, sigma_kms: 40 });
const orbit = { harmonics_kms: Float64Array.of(GAMMA, K2, 0), k_kms: K2 };

/** A trail with pixels of some velocity ranges masked in all exposures. */
function masked(trail: Trail, hidden: (v: number) => boolean): Trail {
  const { velocity_kms } = trail.sampling;
  return {
    ...trail,
    flux: trail.flux.map((f, n) => hidden(velocity_kms[n]!) ? 0 : f),
    error: trail.error.map((e, n) => hidden(velocity_kms[n]!) ? Infinity : e),
  };
}

Deno.test("donorVelocities() follows the sodium doublet exactly without noise", () => {
  const matches = matchExposures(bright, template, { smear_kms: orbitalSmear(bright, orbit) });
  const { curve, strength, masked, faint } = donorVelocities(bright, matches);
  assertEquals([masked, faint], [0, 0]);
  const fit = fitCircular(curve);
  // The smear is rounded to a tenth of the resolution, the template tabled at an eighth.
  assertAlmostEquals(fit.k_kms, K2, 0.5);
  assertAlmostEquals(fit.systemic_kms, GAMMA, 0.3);
  strength.forEach((s) => assertAlmostEquals(s, 0.15, 0.005));
});

Deno.test("donorVelocities(): 68 per cent intervals of K2, γ and P over 200 seeds", () => {
  const pulls = { k: [] as number[], gamma: [] as number[], period: [] as number[] };
  const nights = exposures({
    count: 40,
    reach_kms: 1500,
    pixel_kms: 30,
    sigma_kms: 45,
    per_orbit: 20,
  });
  // Two nights of one orbit each, 12 orbits apart.
  const cycle = nights.cycle.map((c) => c >= 1 ? c + 12 : c);
  const clean = donorTrail({ ...nights, cycle }, { error: 0.05 });
  const shape = gaussianTemplate(clean.line, { ...options, sigma_kms: 45 });
  const smear_kms = orbitalSmear(clean, orbit);
  for (let seed = 1; seed <= 200; seed++) {
    const trail = withNoise(clean, randomStream(seed));
    const { curve } = donorVelocities(trail, matchExposures(trail, shape, { smear_kms }), {
      search_kms: [-500, 500],
    });
    const fit = fitOrbit([curve]);
    const [star] = fit.stars;
    pulls.k.push((star!.k_kms - K2) / star!.k_error_kms);
    pulls.gamma.push((star!.systemic_kms - GAMMA) / star!.systemic_error_kms);
    pulls.period.push((fit.period_ratio - 1) / fit.period_ratio_error);
  }
  for (const [name, z] of Object.entries(pulls)) {
    const held = z.filter((one) => Math.abs(one) < 1).length / z.length;
    assert(held >= 0.6 && held <= 0.76, `${name} held ${held}`);
    assertLess(Math.abs(z.reduce((sum, one) => sum + one, 0) / z.length), 0.25, name);
  }
});

Deno.test("backProjectCorrelation() finds a donor too faint in any one exposure", () => {
  const faint = donorTrail(sampling, { error: 0.3 });
  const pulls: number[] = [];
  for (let seed = 1; seed <= 12; seed++) {
    const trail = withNoise(faint, randomStream(seed));
    const matches = matchExposures(trail, template, { smear_kms: orbitalSmear(trail, orbit) });
    assert(donorVelocities(trail, matches).faint > 50);
    const found = backProjectCorrelation(trail, matches);
    assert(found.detected, `gain ${found.gain}, noise ${found.noise_gain}`);
    pulls.push((found.k_kms - K2) / found.k_error_kms);
    assertLess(Math.abs(found.systemic_kms - GAMMA) / found.errors_kms[2], 4);
    assertLess(Math.abs(found.vx_kms) / found.errors_kms[0], 4);
  }
  assertLess(Math.max(...pulls.map(Math.abs)), 3.5);
  const rms = Math.sqrt(pulls.reduce((sum, z) => sum + z * z, 0) / pulls.length);
  assert(rms > 0.5 && rms < 1.6, `${rms}`); // 12 trials know it to a fifth
});

Deno.test("backProjectCorrelation() finds nothing in noise", () => {
  const empty = donorTrail(sampling, { error: 0.3, depth: 0 });
  for (let seed = 1; seed <= 10; seed++) {
    const trail = withNoise(empty, randomStream(seed));
    assertEquals(backProjectCorrelation(trail, matchExposures(trail, template)).detected, false);
  }
});

Deno.test("backProjectCorrelation() shows the peak of its map at (0, K2)", () => {
  const { map, vy_kms, crossing_phase } = backProjectCorrelation(
    bright,
    matchExposures(bright, template),
  );
  const top = map.gain.reduce((best, g, k) => g > map.gain[best]! ? k : best, 0);
  const step = 2 * map.half_width_kms / (map.pixels - 1);
  assertAlmostEquals(step * (top % map.pixels) - map.half_width_kms, 0, step);
  assertAlmostEquals(step * Math.floor(top / map.pixels) - map.half_width_kms, K2, step);
  assertAlmostEquals(vy_kms, K2, 1);
  assertAlmostEquals(Math.min(crossing_phase, 1 - crossing_phase), 0, 1e-3);
});

Deno.test("measureDonor() chooses width and sign by itself", () => {
  const noisy = withNoise(bright, randomStream(1));
  const found = measureDonor(noisy, options);
  assertEquals(found.sign, "absorption");
  assertEquals(found.orbit!.method, "cross-correlation");
  assertAlmostEquals(found.orbit!.k_kms, K2, 3 * found.orbit!.k_error_kms);
  const turned = { ...noisy, flux: noisy.flux.map((f) => -f) };
  const emission = measureDonor(turned, options);
  assertEquals(emission.sign, "emission");
  assertAlmostEquals(emission.orbit!.k_kms, found.orbit!.k_kms, 0.01);
});

Deno.test("measureDonor() gives no number when masked pixels hide the line", () => {
  const noisy = withNoise(bright, randomStream(2));
  const hidden = measureDonor(masked(noisy, (v) => v > -600 && v < 1000), options);
  assertEquals(hidden.orbit, null);
  assert(hidden.reasons.join().includes("masked pixels"), hidden.reasons.join());
  // One line of the doublet masked half of the time still leaves the other.
  const half = measureDonor(masked(noisy, (v) => v > 300 && v < 1000), options);
  assertAlmostEquals(half.orbit!.k_kms, K2, 4 * half.orbit!.k_error_kms);
});

Deno.test("measureDonor() gives no number when a telluric line stands on the doublet", () => {
  const { velocity_kms } = sampling;
  for (let seed = 1; seed <= 5; seed++) {
    const noisy = withNoise(bright, randomStream(seed));
    const telluric = (v: number) =>
      [[-90, 0.3], [40, 0.5], [380, 0.35], [520, 0.4]].reduce(
        (sum, [at, depth]) => sum + depth! * Math.exp(-0.5 * ((v - at!) / 45) ** 2),
        0,
      );
    const spoilt = { ...noisy, flux: noisy.flux.map((f, n) => f - telluric(velocity_kms[n]!)) };
    const found = measureDonor(spoilt, options);
    assertEquals(found.orbit, null, `K ${found.orbit?.k_kms}`);
    assert(/stands still|noise floor/.test(found.reasons.join()), found.reasons.join());
  }
});

Deno.test("measureDonor() gives no number when the same line also stands still", () => {
  const noisy = withNoise(bright, randomStream(4));
  const still = donorTrail(sampling, { error: 0.05, k_kms: 0, systemic_kms: 20, depth: 0.12 });
  const both = { ...noisy, flux: noisy.flux.map((f, n) => f + still.flux[n]!) };
  const found = measureDonor(both, { ...options, sign: "absorption" });
  assertEquals(found.orbit, null);
  assert(found.reasons.join().includes("stands still"), found.reasons.join());
});

Deno.test("measureDonor() does not take a broad doublet that moves for one that stands still", () => {
  // Either line passes where the other has been: by itself one that stands still explains 40 %.
  const k_kms = 260;
  const few = exposures({ count: 24, reach_kms: 1500, pixel_kms: 25, sigma_kms: 40 });
  const broad = donorTrail(few, { error: 0.04, k_kms, v_sin_i_kms: 120, depth: 0.3 });
  for (let seed = 1; seed <= 3; seed++) {
    const { orbit, reasons } = measureDonor(withNoise(broad, randomStream(seed)), options);
    assertEquals(reasons, []);
    // A Gaussian template is not quite the shape of a rotating star.
    assertAlmostEquals(orbit!.k_kms, k_kms, 4 * orbit!.k_error_kms);
  }
});

Deno.test("donorVelocities() counts exposures in which masked pixels hide a bright line", () => {
  const strong = donorTrail(sampling, { error: 0.02, depth: 0.5 });
  const centres = [GAMMA, GAMMA + 423];
  // All but the far wings of both lines where the star passes γ.
  const hidden = masked(strong, (v) => centres.some((at) => Math.abs(v - at) < 75));
  const found = donorVelocities(hidden, matchExposures(hidden, template));
  assert(found.masked >= 4, `${found.masked}`);
  found.curve.velocity_kms.forEach((v, i) => {
    const truth = GAMMA + K2 * Math.sin(2 * Math.PI * sampling.phase[i]!);
    if (Math.abs(truth - GAMMA) < 10) assertEquals(v, NaN);
  });
});

Deno.test("measureDonor() says that noise is all there is", () => {
  const nothing = withNoise(donorTrail(sampling, { error: 0.3, depth: 0 }), randomStream(3));
  const found = measureDonor(nothing, options);
  assertEquals(found.orbit, null);
  assert(found.reasons.join().includes("lost in noise"), found.reasons.join());
});

// A "template star": lines of two spectral types at the exposures' resolution or better.
type Lines = readonly (readonly [vacuum_angstrom: number, strength: number])[];
const EARLY: Lines = [[SODIUM[0], 1], [SODIUM[1], 1], [8180.2, 0.8], [8206.5, 0.5]];
const LATE: Lines = [[SODIUM[0], 1], [SODIUM[1], 1.2], [8189.9, 0.6], [8171.4, 0.6]];

function star(
  lines: Lines,
  options: { sigma_kms?: number; reach_kms?: number; name?: string } = {},
) {
  const { sigma_kms = 20, reach_kms = 2400, name = "star" } = options;
  const c = 299792.458;
  const step = sigma_kms / 3;
  const count = Math.ceil(2 * reach_kms / step);
  const wave = Float64Array.from(
    { length: count },
    (_, k) => SODIUM[0] * (1 + (step * k - reach_kms) / c),
  );
  const spectrum: Spectrum = {
    source: name,
    group: 0,
    wavelength_angstrom: wave,
    // Depths fall with width so that areas are those of the trail's lines; a sloping continuum.
    flux: wave.map((w) => {
      const dip = lines.reduce((sum, [at, s]) => {
        const u = (w / at - 1) * c / sigma_kms;
        return sum + 0.5 * s * (40 / sigma_kms) * 0.5 * Math.exp(-0.5 * u * u);
      }, 0);
      return (1 - dip) * (3 + 0.01 * (w - SODIUM[0]));
    }),
    error: wave.map(() => 0.01),
    errors_given: true,
    mid: [2460000, 0],
    exposure_s: 60,
    observer_factor: 1,
    resolution_angstrom: wave.map((w) => w * sigma_kms / c * 2.3548200450309493),
  };
  return spectrum;
}

const V_SIN_I = 110;
const lines = [...EARLY];
const turning = donorTrail(sampling, { error: 0.02, v_sin_i_kms: V_SIN_I, components: lines });

Deno.test("subtractTemplates() finds spectral type, rotation and share of light", () => {
  const templates = [["early", EARLY], ["late", LATE]].map(([name, kind]) =>
    spectrumTemplate(star(kind as Lines, { name: name as string }), {
      line: turning.line,
      reach_kms: 2200,
    })
  );
  const noisy = withNoise(turning, randomStream(4));
  const found = subtractTemplates(noisy, templates, { orbit, limb_darkening: 0 });
  const [best, other] = found;
  assertEquals(best!.template, "early");
  assert(other!.chi_square - best!.chi_square > 100);
  assert(best!.rotation_seen);
  assertAlmostEquals(best!.v_sin_i_kms, V_SIN_I, 4 * best!.v_sin_i_error_kms);
  assertLess(best!.v_sin_i_error_kms, 5);
  // Template depth: 0.25·40/σ in area 10·√2π against 0.15·40·√2π in the trail: a share of 0.6.
  assertAlmostEquals(best!.share, 0.6, 5 * best!.share_error);
  assertAlmostEquals(best!.chi_square / best!.degrees_of_freedom, 1, 0.1);
});

Deno.test("subtractTemplates() does not see rotation where there is none", () => {
  const still = withNoise(
    donorTrail(sampling, { error: 0.05, components: lines }),
    randomStream(6),
  );
  const sharp = spectrumTemplate(star(EARLY), { line: still.line, reach_kms: 2200 });
  const [found] = subtractTemplates(still, [sharp], { orbit });
  assertEquals(found!.rotation_seen, false);
  assertThrows(() => subtractTemplates(still, [], { orbit }), InputError, "at least one template");
});

Deno.test("spectrumTemplate() refuses a template elsewhere or of unknown resolution", () => {
  const { line } = bright;
  const elsewhere = star(EARLY);
  const shifted = {
    ...elsewhere,
    wavelength_angstrom: elsewhere.wavelength_angstrom.map((w) => w + 900),
  };
  assertThrows(
    () => spectrumTemplate(shifted, { line, reach_kms: 1500 }),
    InputError,
    'it must overlap the line\'s range of ±1500 km/s about Na I 8190: current value is "no overlap"',
  );
  assertThrows(
    () => spectrumTemplate({ ...elsewhere, resolution_angstrom: null }, { line, reach_kms: 1500 }),
    InputError,
    "resolution must be known",
  );
});

Deno.test("matchExposures() refuses a template that is coarser than the exposures or elsewhere", () => {
  const coarse = spectrumTemplate(star(EARLY, { sigma_kms: 80 }), {
    line: bright.line,
    reach_kms: 2200,
  });
  assertThrows(() => matchExposures(bright, coarse), InputError, "at least as sharp");
  const far: DonorTemplate = { ...template, first_kms: 9000 };
  assertThrows(() => matchExposures(bright, far), InputError, "must overlap the trail's");
});

Deno.test("broadenTemplate() adds variances and leaves the centre", () => {
  const wide = broadenTemplate(template, {
    sigma_kms: 30,
    v_sin_i_kms: 100,
    limb_darkening: 0,
    smear_kms: 90,
  });
  const moments = ({ flux, first_kms, step_kms }: DonorTemplate) => {
    let area = 0, first = 0, second = 0;
    flux.forEach((f, k) => {
      const v = first_kms + k * step_kms;
      area += f;
      first += f * v;
      second += f * v * v;
    });
    const mean = first / area;
    return { area, mean, variance: second / area - mean * mean };
  };
  const before = moments(template), after = moments(wide);
  assertAlmostEquals(after.area / before.area, 1, 1e-12);
  assertAlmostEquals(after.mean, before.mean, 1e-6);
  // A uniform disc has variance (v sin i)²/4, a box w²/12; kernels are tabled at σ/8 = 5 km/s.
  assertAlmostEquals(after.variance - before.variance, 900 + 2500 + 675, 20);
});
