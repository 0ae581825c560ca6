import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertThrows,
} from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { makeTrail, type Trail, type TrailOptions } from "../../engine/trail/mod.ts";
import { EPHEMERIS, H_BETA, madeSpectra, type Making, profile } from "./made_spectra.ts";

const WINDOWS = [[-8000, -3000], [5800, 7800]] as const;

function trailOf(making: Making = {}, options: Partial<TrailOptions> = {}): Trail {
  return makeTrail(madeSpectra(making), {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    ...options,
  });
}

const codes = (trail: Trail) => trail.warnings.map((w) => w.code);

Deno.test("makeTrail() recovers the profiles that were put in, with honest errors", () => {
  const trail = trailOf({ signal_to_noise: 30 });
  const { sampling } = trail;
  assertEquals(sampling.count, 60);
  let chi = 0;
  for (let i = 0; i < sampling.count; i++) {
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      const truth = profile(sampling.velocity_kms[k]!, (i / 60) * 1.3);
      // The continuum was put in with a slope that is one at the line.
      if (Number.isFinite(trail.error[k]!)) {
        chi +=
          ((trail.flux[k]! - truth / (1 - 2e-5 * sampling.velocity_kms[k]!)) / trail.error[k]!) **
            2;
      }
    }
  }
  // 9 700 samples scatter by 1.4 % in chi-square; the noise scale is known to 1.5 %, twice that in
  // its square; the continuum's own errors add about 1 %.
  assertAlmostEquals(chi / trail.flux.length, 1, 0.05);
  assertAlmostEquals(trail.noise_scale, 1, 0.04);
  assertEquals(codes(trail), []);
});

Deno.test("makeTrail() folds, keeps the order of time and counts cycles", () => {
  const trail = trailOf({ orbits: 2.6, count: 26 });
  const { phase, cycle, phase_width } = trail.sampling;
  for (let i = 0; i < 26; i++) {
    assertAlmostEquals(cycle[i]! + phase[i]!, 0.1 * i, 1e-6);
    assertAlmostEquals(phase_width[i]!, 0.09, 1e-9);
  }
  assertEquals(cycle[25], 2);
});

Deno.test("makeTrail() uses the period derivative", () => {
  // One orbit late in a quadratic ephemeris: T = P E + ½ P Pdot E², here 0.01 orbits at E = 1.
  const trail = trailOf({ count: 3, orbits: 3 }, {
    ephemeris: { ...EPHEMERIS, period_derivative: 0.02 },
    cosmic_rays: false,
  });
  assertAlmostEquals(trail.sampling.phase[1]!, 1 - 0.01 + 0.0002, 2e-4);
});

Deno.test("makeTrail() does not see slit losses when it divides, and keeps them when it scales", () => {
  const divided = trailOf({ signal_to_noise: 300 });
  const scaled = trailOf({ signal_to_noise: 300 }, { continuum: "scale" });
  const height = (trail: Trail) =>
    Array.from({ length: 60 }, (_, i) => {
      const row = trail.grid.flux.subarray(i * trail.grid.columns, (i + 1) * trail.grid.columns);
      return row.reduce((a, b) => a + b, 0) * trail.grid.step_kms;
    });
  const spread = (values: number[]) => {
    const mean = values.reduce((a, b) => a + b, 0) / values.length;
    return Math.sqrt(values.reduce((s, v) => s + (v - mean) ** 2, 0) / values.length) / mean;
  };
  assertLess(spread(height(divided)), 0.02);
  assertGreater(spread(height(scaled)), 0.15);
});

Deno.test("makeTrail() undoes slit losses with a companion on the slit", () => {
  const spectra = madeSpectra({ signal_to_noise: 300 });
  const photometry = {
    time: spectra.map((s) => s.mid),
    flux: Float64Array.from(spectra, (_, k) => 500 * (1 + 0.3 * Math.sin(7 * k))),
    of: "companion" as const,
  };
  const trail = makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    continuum: "scale",
    photometry,
  });
  const middle = (trail.grid.columns - 1) / 2;
  const plain = trailOf({ signal_to_noise: 300 });
  for (let i = 0; i < 60; i++) {
    const at = i * trail.grid.columns + middle;
    assertAlmostEquals(trail.grid.flux[at]!, plain.grid.flux[at]!, 0.03);
  }
});

Deno.test("makeTrail() scales each exposure to photometry of the target", () => {
  const spectra = madeSpectra({ signal_to_noise: 300, count: 20, orbits: 1 });
  const bright = spectra.map((_, k) => 1 + 0.5 * Math.sin(k));
  const trail = makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    continuum: "scale",
    cosmic_rays: false,
    photometry: { time: spectra.map((s) => s.mid), flux: Float64Array.from(bright), of: "target" },
  });
  const sorted = bright.toSorted((a, b) => a - b);
  const level = 0.5 * (sorted[9]! + sorted[10]!);
  for (let i = 0; i < 20; i++) {
    const k = trail.sampling.start[i]! + 100;
    const v = trail.sampling.velocity_kms[k]!;
    const truth = profile(v, i / 20) / (1 - 2e-5 * v) * bright[i]! / level;
    assertAlmostEquals(trail.flux[k]!, truth, 6 * trail.error[k]!);
  }
});

Deno.test("makeTrail() takes a light curve for each group: shared ones share their level, others have their own", () => {
  const nights = [0, 1, 2].map((group) =>
    madeSpectra({
      signal_to_noise: 300,
      count: 8,
      orbits: 1,
      group,
      start_d: group,
      slit_losses: false,
    })
  );
  const spectra = nights.flat();
  const curve = (flux: (night: number) => number) => ({
    time: spectra.map((s) => s.mid),
    flux: Float64Array.from(spectra, (s) => flux(s.group)),
    of: "target" as const,
  });
  // The second night is twice as bright as the first by their common photometry; the third has none.
  const shared = curve((night) => night === 1 ? 2 : 1);
  const trail = makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    continuum: "scale",
    cosmic_rays: false,
    photometry: [shared, shared, null],
  });
  assertEquals([...trail.group], spectra.map((s) => s.group));
  // Mid-line of the first exposure of each night, all at phase 0.
  const middle = [0, 8, 16].map((row) =>
    trail.grid.flux[row * trail.grid.columns + (trail.grid.columns >> 1)]!
  );
  assertAlmostEquals(middle[1]! / middle[0]!, 2, 0.05);
  const alone = makeTrail(nights[2]!, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    continuum: "scale",
    cosmic_rays: false,
  });
  assertAlmostEquals(middle[2]!, alone.grid.flux[alone.grid.columns >> 1]!, 0.02);
  assertThrows(
    () => makeTrail(spectra, { line: H_BETA, ephemeris: EPHEMERIS, photometry: [null, shared] }),
    InputError,
    'photometry scales exposures only where continuum is "scale": current value is "divide" (key trail.continuum)',
  );
});

Deno.test("makeTrail() masks what is not a number and never gives it weight", () => {
  const spectra = madeSpectra({ count: 8 }).map((s, k) => ({
    ...s,
    flux: s.flux.map((f, i) => i % 50 === k ? NaN : f),
    error: s.error.map((e, i) => i % 50 === k + 10 ? 0 : i % 50 === k + 20 ? NaN : e),
  }));
  const before = structuredClone(spectra);
  const trail = makeTrail(spectra, { line: H_BETA, ephemeris: EPHEMERIS, continuum_kms: WINDOWS });
  assertEquals(spectra, before);
  let masked = 0;
  trail.flux.forEach((f, k) => {
    assert(Number.isFinite(f));
    assert(trail.error[k]! > 0);
    if (trail.error[k] === Infinity) {
      masked++;
      assertEquals(f, 0);
    }
  });
  assertAlmostEquals(masked / trail.flux.length, 3 / 50, 0.02);
});

Deno.test("makeTrail() masks cosmic rays and says how many, keeping the S-wave", () => {
  const clean = trailOf({ signal_to_noise: 60, spot: 2, spot_width_kms: 40 });
  assertEquals(codes(clean), []);
  const spectra = madeSpectra({ signal_to_noise: 60, spot: 2, spot_width_kms: 40 });
  const struck = spectra.map((s, k) => ({
    ...s,
    flux: s.flux.map((f, i) => i === 250 + 53 * k % 150 ? f + 9000 : f),
  }));
  const trail = makeTrail(struck, { line: H_BETA, ephemeris: EPHEMERIS, continuum_kms: WINDOWS });
  const said = trail.warnings.find((w) => w.code === "cosmic-rays");
  assertEquals(said?.text.startsWith("masked "), true);
  const hits = [...trail.error.keys()].filter((k) => trail.error[k] === Infinity).length;
  assertGreater(hits, 50);
  assertLess(hits, 70);
  const off = makeTrail(struck, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    cosmic_rays: false,
  });
  assertEquals(off.error.includes(Infinity), false);
});

Deno.test("makeTrail() skips phases across zero", () => {
  const trail = trailOf({}, { skip_phases: [[0.95, 1.05]] });
  assertEquals([...trail.sampling.phase].some((p) => p > 0.95 || p < 0.05), false);
  assertLess(trail.sampling.count, 60);
});

Deno.test("makeTrail() bins in phase on the grid and leaves native samples alone", () => {
  const trail = trailOf({ count: 100, orbits: 2 }, { phase_bins: 20 });
  assertEquals([trail.grid.rows, trail.sampling.count], [20, 100]);
  assertAlmostEquals(trail.grid.phase[3]!, 0.175, 1e-12);
  assertGreater(trail.grid.phase_width[3]!, 0.05);
  const single = trailOf({ count: 100, orbits: 2 });
  const middle = (single.grid.columns - 1) / 2 + 5;
  // Five exposures a bin.
  assertAlmostEquals(
    trail.grid.error[3 * trail.grid.columns + middle]! /
      single.grid.error[15 * single.grid.columns + middle]!,
    1 / Math.sqrt(5),
    0.12,
  );
});

Deno.test("makeTrail() measures errors stated twice too small, group by group", () => {
  const good = madeSpectra({ count: 20, orbits: 1 });
  const bad = madeSpectra({ count: 20, orbits: 1, group: 1, start_d: 0.24, seed: 2 })
    .map((s) => ({ ...s, error: s.error.map((e) => e / 2) }));
  const trail = makeTrail([...good, ...bad], {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
  });
  const [first, second] = trail.noise.groups;
  assertAlmostEquals(first!.applied_scale, 1, 4 * first!.measured_scale_error);
  assertAlmostEquals(second!.applied_scale, 2, 4 * second!.measured_scale_error);
  assertEquals(codes(trail), ["errors-implausible"]);
  const fixed = makeTrail(bad, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    noise_scale: 3,
  });
  assertEquals(fixed.noise_scale, 3);
});

Deno.test("makeTrail() takes a line from whichever exposures cover it, and says what is covered when none does", () => {
  const blue = madeSpectra({ count: 5, high_angstrom: 4800 });
  const both = madeSpectra({ count: 5, group: 1, start_d: 0.1 });
  const trail = makeTrail([...blue, ...both], {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
  });
  assertEquals([trail.sampling.count, [...new Set(trail.group)]], [5, [1]]);
  assertThrows(
    () => makeTrail(blue, { line: H_BETA, ephemeris: EPHEMERIS, continuum_kms: WINDOWS }),
    InputError,
    'Cannot make trail of H beta as an exposure must cover 4822.1 to 4903.2 angstrom in vacuum: current value is "4700.0 to 4799.5" angstrom; name a line within what is covered',
  );
});

Deno.test("makeTrail() drops exposures without a continuum and says why when none is left", () => {
  const spectra = madeSpectra({ count: 12 });
  const dark = spectra.map((s, k) =>
    k < 2 ? { ...s, flux: s.flux.map((f) => f - 1000 * (1 + 0.3 * Math.sin(7 * k))) } : s
  );
  const trail = makeTrail(dark, { line: H_BETA, ephemeris: EPHEMERIS, continuum_kms: WINDOWS });
  assertEquals(trail.sampling.count, 10);
  assertEquals(codes(trail).includes("continuum-not-seen"), true);
  assertThrows(
    () =>
      makeTrail(spectra.map((s) => ({ ...s, flux: s.flux.map(() => NaN) })), {
        line: H_BETA,
        ephemeris: EPHEMERIS,
      }),
    InputError,
    "Cannot make trail of H beta as at least one exposure must hold a spectrum: current value is 0; dropped as blank (no two usable samples differ): night-0/000.fits",
  );
  assertThrows(
    () => makeTrail(spectra, { line: H_BETA, ephemeris: EPHEMERIS, skip_phases: [[0, 1]] }),
    InputError,
    "at least one exposure must lie outside skip_phases",
  );
});

Deno.test("makeTrail() takes the instrumental profile from the spectra, the options, or two pixels, and says so", () => {
  const known = trailOf({ count: 4, fwhm_angstrom: 1.2 });
  // 1.2 Å at 4862.69 Å is 73.98 km/s full width: 31.42 km/s standard deviation.
  assertAlmostEquals(known.sampling.profile_sigma_kms[0]!, 31.42, 0.01);
  assertAlmostEquals(
    trailOf({ count: 4 }, { resolution_kms: 100 }).sampling.profile_sigma_kms[0]!,
    42.47,
    0.01,
  );
  const spectra = madeSpectra({ count: 4 }).map((s) => ({ ...s, resolution_angstrom: null }));
  const unknown = makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
  });
  assertAlmostEquals(unknown.sampling.profile_sigma_kms[0]!, 2 * 30.83 / 2.3548, 0.05);
  assertEquals(codes(unknown).includes("resolution-unknown"), true);
});

Deno.test("makeTrail() refuses options out of range, naming the key", () => {
  const spectra = madeSpectra({ count: 3 });
  const wrong: [Partial<TrailOptions>, string][] = [
    [{ reach_kms: 0 }, "reach must be positive: current value is 0 km/s (key lines.reach_kms)"],
    [{ step_kms: NaN }, "step of the grid must be positive: current value is NaN km/s"],
    [
      { noise_scale: -1 },
      "noise scale must be positive: current value is -1 (key trail.noise_scale)",
    ],
    [
      { phase_bins: 2.5 },
      "number of phase bins must be a whole number from 0: current value is 2.5",
    ],
    [
      { continuum_kms: [[3000, 2000]] },
      "a window must have its lower end first: current value is [3000,2000] km/s",
    ],
    [{ continuum_kms: [] }, "at least one continuum window is needed"],
    [
      { skip_phases: [[0.6, 0.4]] },
      "a range must have its lower end first: current value is [0.6,0.4] cycles",
    ],
  ];
  for (const [options, text] of wrong) {
    assertThrows(
      () => makeTrail(spectra, { line: H_BETA, ephemeris: EPHEMERIS, ...options }),
      InputError,
      text,
    );
  }
});

Deno.test("makeTrail() takes exposures of different resolution and dispersion together", () => {
  const fine = madeSpectra({ count: 12, orbits: 1, pixel_angstrom: 0.25, fwhm_angstrom: 0.6 });
  const coarse = madeSpectra({
    count: 12,
    orbits: 1,
    pixel_angstrom: 1,
    fwhm_angstrom: 3,
    group: 1,
    start_d: 0.4,
    seed: 2,
  });
  const trail = makeTrail([...fine, ...coarse], {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
  });
  const { start, profile_sigma_kms } = trail.sampling;
  assertAlmostEquals((start[1]! - start[0]!) / (start[24]! - start[23]!), 4, 0.1);
  assertAlmostEquals(profile_sigma_kms[23]! / profile_sigma_kms[0]!, 5, 1e-9);
  assertAlmostEquals(trail.noise.groups[1]!.measured_scale, 1, 0.15);
});

Deno.test("makeTrail() applies the noise scale to every error", () => {
  const once = trailOf({ count: 6 }, { noise_scale: 1 });
  const thrice = trailOf({ count: 6 }, { noise_scale: 3 });
  once.error.forEach((e, k) => assertAlmostEquals(thrice.error[k]! / e, 3, 1e-12));
});

Deno.test("makeTrail() takes the period at the exposure for its width in phase", () => {
  const at = (period_derivative: number) =>
    trailOf({ count: 3, orbits: 3 }, {
      ephemeris: { ...EPHEMERIS, period_derivative },
      cosmic_rays: false,
    }).sampling;
  const orbit = at(0.02).cycle[2]! + at(0.02).phase[2]!;
  assertAlmostEquals(at(0).phase_width[2]! / at(0.02).phase_width[2]!, 1 + 0.02 * orbit, 1e-9);
});

Deno.test("makeTrail() leaves out exposures that show less than half of the line", () => {
  const whole = madeSpectra({ count: 4 });
  const sliver = madeSpectra({
    count: 4,
    low_angstrom: 4855,
    high_angstrom: 4870,
    start_d: 0.05,
    group: 1,
  });
  const half = madeSpectra({ count: 4, low_angstrom: 4855, start_d: 0.07, group: 2 });
  const trail = makeTrail([...whole, ...sliver, ...half], {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
    cosmic_rays: false,
  });
  assertEquals([...new Set(trail.group)], [0, 2]);
  assertEquals(codes(trail).includes("line-partly-covered"), true);
  assertEquals(codes(trail).includes("continuum-one-sided"), true);
});

Deno.test("makeTrail() says which exposures do not cover the line", () => {
  const spectra = madeSpectra({ count: 20 }).map((one, i) =>
    i % 8 === 3 ? { ...one, wavelength_angstrom: one.wavelength_angstrom.map((w) => w + 900) } : one
  );
  const trail = makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: WINDOWS,
  });
  assertEquals(trail.sampling.count, 17);
  assertEquals(
    trail.warnings.find(({ code }) => code === "line-not-covered")?.text,
    "3 exposures do not cover the line, as others of their group do, and are left out: night-0/003.fits, night-0/011.fits, night-0/019.fits",
  );
});
