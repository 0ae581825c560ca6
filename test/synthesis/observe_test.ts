import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertThrows,
} from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { orbitalPhase } from "@millrace/millrace/binary";
import { randomStream } from "@millrace/millrace/numerics";
import {
  airToVacuum,
  barycentricFactor,
  lineNamed,
  midExposureBjd,
  vacuumToAir,
} from "@millrace/millrace/sky";
import { encodeExposures } from "@millrace/millrace/spectra";
import { type Model, observe, planExposures, synthesize } from "@millrace/millrace/synthesis";
import type { Sampling } from "@millrace/millrace/trail";
import { deviation, exposuresOf, mean, observation, withArm } from "./observations.ts";
import { binary } from "./samplings.ts";

const C = 299792.458;
const NOTHING: Model = { parts: [] };
const many = (count: number) =>
  planExposures([2460311, 0.5], { count, exposure_s: 100, overhead_s: 20 });

Deno.test("observe() records what synthesize() predicts on the same pixels", () => {
  const model: Model = { parts: ["disc", "spot", "donor"] };
  const raw = exposuresOf(model);
  const rest = lineNamed("H beta").vacuum_angstrom;
  const { target, site, ephemeris, systemic_kms } = observation;
  for (const { flux, wavelength_angstrom, start, exposure_s } of raw) {
    const moment = midExposureBjd({ date: start, exposure_s }, { target, site });
    const count = flux.length;
    const sampling: Sampling = {
      count: 1,
      phase: Float64Array.of(orbitalPhase(ephemeris, moment.bjd).phase),
      cycle: Float64Array.of(0),
      phase_width: Float64Array.of(exposure_s / 86400 / ephemeris.period_d),
      start: Uint32Array.of(0, count),
      velocity_kms: wavelength_angstrom.map((w) =>
        C * (airToVacuum(w) * moment.observer_factor / rest - 1)
      ),
      pixel_kms: new Float64Array(count),
      profile_sigma_kms: Float64Array.of(C * 1 / Math.sqrt(8 * Math.LN2) / rest),
    };
    const expected = synthesize(model, { binary, sampling, systemic_kms: systemic_kms! });
    // 20 km/s from the line's end on there is continuum alone.
    const level = flux[5]!;
    const peak = Math.max(...expected);
    for (const [n, value] of expected.entries()) {
      // A Gaussian that includes the pixel stands for optics and pixel: 1e-3 of the peak at 2.5
      // pixels to the resolution. S/N of 20 000 per element is 1e-4 of the continuum per pixel.
      assertAlmostEquals(flux[n]! / level - 1, value, 1e-3 * peak + 8e-4);
    }
  }
});

Deno.test("observe() puts lines where the telescope's motion takes them", () => {
  // Far apart in the year the Earth moves by tens of km/s.
  const exposures = [2460311.2, 2460401.2, 2460491.2].map((start) => ({
    start: [Math.floor(start), start % 1] as const,
    exposure_s: 60,
  }));
  const model: Model = { parts: ["accretor"], accretor: { equivalent_width_kms: 500 } };
  const raw = exposuresOf(model, { exposures, binary: { ...binary, k_accretor_kms: 1e-6 } });
  const rest = lineNamed("H beta").vacuum_angstrom;
  for (const { flux, wavelength_angstrom, start } of raw) {
    const level = (flux[3]! + flux[596]!) / 2;
    let light = 0, first = 0;
    for (const [n, value] of flux.entries()) {
      if (Math.abs(wavelength_angstrom[n]! - 4861) > 8) continue;
      light += value - level;
      first += (value - level) * wavelength_angstrom[n]!;
    }
    const mid = [start[0], start[1] + 30 / 86400] as const;
    const factor = barycentricFactor(mid, { target: observation.target, site: observation.site });
    const expected = vacuumToAir(rest * (1 + 27 / C) / factor);
    // Photon noise of the centroid: 0.002 Å.
    assertAlmostEquals(first / light, expected, 0.008);
  }
});

Deno.test("observe() gives the continuum the stated signal to noise per resolution element", () => {
  for (const signal_to_noise of [10, 40]) {
    const raw = exposuresOf(NOTHING, {
      ...withArm({ signal_to_noise }),
      exposures: many(20),
      sky: { brightness: 0.5 },
      instrument: { read_noise: 4 },
    }, 2);
    const pixels = raw.flatMap(({ flux }) => [...flux]);
    const per_element = mean(pixels) / deviation(pixels) * Math.sqrt(1 / 0.4);
    // 12 000 pixels: 0.65 % of error.
    assertAlmostEquals(per_element / signal_to_noise, 1, 0.026);
    const stated = mean(raw.flatMap(({ error }) => [...error!]));
    assertAlmostEquals(stated / deviation(pixels), 1, 0.026);
  }
});

Deno.test("observe() gives the same exposures for the same stream, and others for another", () => {
  const model: Model = { parts: ["disc"] };
  const bytes = (seed: number) =>
    encodeExposures(exposuresOf(model, {}, seed)).map((file) => file.bytes);
  const alike = (a: Uint8Array, b: Uint8Array) => a.every((byte, k) => byte === b[k]);
  const [first, again, other] = [bytes(5), bytes(5), bytes(6)];
  for (const [k, file] of first.entries()) {
    assert(alike(file, again[k]!));
    assert(!alike(file, other[k]!));
  }
});

Deno.test("observe() leaves its arguments as they are", () => {
  const model: Model = { parts: ["disc", "spot"] };
  const before = structuredClone({ model, observation });
  exposuresOf(model);
  assertEquals({ model, observation }, before);
});

Deno.test("observe() tilts the continuum and lets each exposure lose light in the slit", () => {
  const raw = exposuresOf(NOTHING, {
    ...withArm({ continuum_slope: -3 }),
    exposures: many(200),
    instrument: { slit_loss: 0.3 },
  }, 3);
  const levels = raw.map(({ flux }) => mean(flux));
  // Transmission exp(−0.3 |z|): mean exp(0.045) erfc(0.3/√2) = 0.799; the spread of 200 is 0.9 %.
  const clear = mean(exposuresOf(NOTHING, withArm({ continuum_slope: -3 }))[0]!.flux);
  assertAlmostEquals(mean(levels) / clear, 0.799, 0.04);
  const { flux, wavelength_angstrom: w } = raw[0]!;
  const ratio = mean(flux.slice(0, 20)) / mean(flux.slice(-20));
  assertAlmostEquals(ratio, (w[10]! / w[589]!) ** -3, 2e-3);
  const tilted = exposuresOf(NOTHING, { exposures: many(200), instrument: { slit_tilt: 0.1 } }, 3);
  const slopes = tilted.map(({ flux }) => mean(flux.slice(-20)) / mean(flux.slice(290, 310)) - 1);
  assertAlmostEquals(deviation(slopes), 0.1 * 589.5 / 600 * 2 - 0.1, 0.02);
});

Deno.test("observe() modulates the continuum with phase and leaves the lines' light", () => {
  const raw = exposuresOf({ parts: ["disc"] }, {
    exposures: planExposures([2460311, 0.5], { count: 30, exposure_s: 100, overhead_s: 137 }),
    variability: { modulation: 0.2, modulation_phase: 0.8 },
  });
  for (const { flux, start, exposure_s } of raw) {
    const { bjd } = midExposureBjd({ date: start, exposure_s }, observation);
    const { phase } = orbitalPhase(observation.ephemeris, bjd);
    const level = mean(flux.slice(0, 10));
    const clear = level / (1 + 0.2 * Math.cos(2 * Math.PI * (phase - 0.8)));
    assertAlmostEquals(clear, mean(raw.map((one) => mean(one.flux.slice(0, 10)))), 0.01 * clear);
    const line = flux.reduce((sum, value) => sum + value - level, 0) * 0.4;
    // 3000 km/s of the average continuum, on its own light scale of 4862.7 Å.
    assertAlmostEquals(line / clear, 3000 / C * 4862.7, 0.2);
  }
});

Deno.test("observe() makes flickering that forgets with its time scale", () => {
  const raw = exposuresOf(NOTHING, {
    exposures: planExposures([2460311, 0.1], { count: 3000, exposure_s: 60 }),
    ...withArm({ pixels: 10 }),
    variability: { flickering: 0.15, flickering_time_s: 600 },
  }, 4);
  const levels = raw.map(({ flux }) => Math.log(mean(flux)));
  assertAlmostEquals(deviation(levels), 0.15, 0.02);
  const middle = mean(levels);
  const lag = (k: number) =>
    mean(levels.slice(k).map((level, i) => (level - middle) * (levels[i]! - middle))) /
    deviation(levels) ** 2;
  // A damped random walk: e^−1 after 600 s, ten exposures. 300 independent stretches: 6 %.
  assertAlmostEquals(lag(1), Math.exp(-0.1), 0.03);
  assertAlmostEquals(lag(10), Math.exp(-1), 0.15);
  assertLess(Math.abs(lag(100)), 0.15);
});

Deno.test("observe() drifts the zero of wavelengths", () => {
  const model: Model = { parts: ["accretor"], accretor: { equivalent_width_kms: 500 } };
  const drifting = exposuresOf(model, { instrument: { drift_kms_per_h: 30 } });
  const still = exposuresOf(model, {});
  const centre = ({ flux, wavelength_angstrom }: typeof still[number]) => {
    const level = mean(flux.slice(0, 50));
    const light = flux.map((value, n) =>
      Math.abs(wavelength_angstrom[n]! - 4861) < 10 ? value - level : 0
    );
    return light.reduce((sum, value, n) => sum + value * wavelength_angstrom[n]!, 0) /
      light.reduce((a, b) => a + b);
  };
  for (const [i, exposure] of drifting.entries()) {
    const kms = (centre(exposure) / centre(still[i]!) - 1) * C;
    assertAlmostEquals(kms, 30 * i * 1040 / 3600, 0.6);
  }
});

Deno.test("observe() strews cosmic rays at the stated rate, and the errors do not know", () => {
  const exposures = many(50);
  const hit = exposuresOf(NOTHING, {
    exposures,
    ...withArm({ signal_to_noise: 20 }),
    instrument: { cosmic_rays: 0.2, cosmic_ray_electrons: 1e6 },
  }, 5);
  let count = 0;
  for (const { flux, error } of hit) {
    const level = mean([...flux].sort((a, b) => a - b).slice(200, 400));
    for (const [n, value] of flux.entries()) {
      const above = value - level > 30 * error![n]!;
      const before = n > 0 && flux[n - 1]! - level > 30 * error![n - 1]!;
      if (above && !before) count++;
    }
  }
  // 0.2 per pixel and hour: 600 pixels × 50 × 100 s: 167 expected, 13 of spread, a few neighbours merged.
  assertAlmostEquals(count, 167, 45);
});

Deno.test("observe() with resampled pixels correlates neighbours", () => {
  const correlation = (resampled: boolean) => {
    const raw = exposuresOf(NOTHING, {
      exposures: many(40),
      ...withArm({ signal_to_noise: 30 }),
      instrument: { resampled },
    }, 6);
    return mean(raw.map(({ flux }) => {
      const middle = mean(flux);
      const pairs = [...flux].slice(1).map((value, n) => (value - middle) * (flux[n]! - middle));
      return mean(pairs) / deviation(flux) ** 2;
    }));
  };
  assertAlmostEquals(correlation(false), 0, 0.03);
  // s(1−s)/(s² + (1−s)²) averaged over shifts s in [0, 1): π/4 − ½ = 0.285.
  assertAlmostEquals(correlation(true), 0.285, 0.1);
});

Deno.test("observe() with resampled pixels keeps lines in their place", () => {
  const model: Model = { parts: ["disc", "spot"] };
  const plain = exposuresOf(model),
    resampled = exposuresOf(model, { instrument: { resampled: true } });
  for (const [i, { flux }] of plain.entries()) {
    const other = resampled[i]!.flux;
    const peak = Math.max(...flux);
    // Linear interpolation broadens by up to a quarter of a pixel's square.
    for (const [n, value] of flux.entries()) assertAlmostEquals(other[n]!, value, 0.01 * peak);
  }
});

Deno.test("observe() keeps sky lines and telluric features at rest at the telescope", () => {
  const raw = exposuresOf({ parts: [] }, {
    exposures: [
      { start: [2460311, 0.2], exposure_s: 60 },
      { start: [2460401, 0.2], exposure_s: 60 },
    ],
    sky: {
      lines: [{ air_angstrom: 4800, equivalent_width_angstrom: 3 }],
      residual: 0.5,
      telluric: [{ air_angstrom: 4920, fwhm_angstrom: 2, depth: 0.4 }],
    },
  });
  for (const { flux, wavelength_angstrom: w } of raw) {
    const top = flux.indexOf(Math.max(...flux)), bottom = flux.indexOf(Math.min(...flux));
    assertAlmostEquals(w[top]!, 4800, 0.3);
    assertAlmostEquals(w[bottom]!, 4920, 0.3);
    const level = mean(flux.slice(0, 50));
    let left = 0;
    for (let n = 100; n < 200; n++) left += (flux[n]! / level - 1) * 0.4;
    // Half of an equivalent width of 3 Å; photon noise 0.002 Å.
    assertAlmostEquals(left, 1.5, 0.01);
    let taken = 0;
    for (let n = 400; n < 500; n++) taken += (1 - flux[n]! / level) * 0.4;
    assertAlmostEquals(taken, 0.4 * 2 * Math.sqrt(Math.PI / Math.LN2) / 2, 0.01);
  }
});

Deno.test("observe() lets the sky through the slit whatever the target loses", () => {
  const sky = { brightness: 5, residual: 1 };
  const levels = (slit_loss: number, brightness: number) =>
    exposuresOf(NOTHING, { sky: { ...sky, brightness }, instrument: { slit_loss } }, 7)
      .map(({ flux }) => mean(flux));
  const [clear] = levels(0, 0);
  const lossy = levels(1, 0).map((level) => level / clear!);
  const both = levels(1, 5).map((level) => level / clear!);
  // The S/N is kept by more electrons when there is sky: one sixth of them are the target's.
  for (const [i, level] of both.entries()) assertAlmostEquals(level / 6, lossy[i]! + 5, 0.01);
});

Deno.test("observe() records every line in the arms that cover it", () => {
  const [blue] = observation.arms;
  const raw = exposuresOf({ parts: ["disc"] }, {
    arms: [blue!, { ...blue!, first_angstrom: 4620, pixels: 400 }],
    lines: [
      { line: lineNamed("H beta") },
      {
        line: lineNamed("He II 4686"),
        model: { parts: ["accretor"], accretor: { equivalent_width_kms: 300 } },
      },
    ],
  });
  assertEquals(raw.length, 12);
  const [first, second] = [raw[0]!, raw[6]!];
  assertEquals([first.flux.length, second.flux.length], [600, 400]);
  assertEquals(first.start, second.start);
  const light = ({ flux }: typeof first) => {
    const level = mean(flux.slice(0, 10));
    return flux.reduce((sum, value) => sum + value / level - 1, 0) * 0.4;
  };
  assertAlmostEquals(light(first), 3000 / C * 4862.7, 0.1);
  // The second arm holds He II 4686 of 300 km/s and ends before H beta.
  assertAlmostEquals(light(second), 300 / C * 4687, 0.1);
});

Deno.test("observe() takes a tabulated profile for what it is", () => {
  const sigma = Math.sqrt((1 / Math.sqrt(8 * Math.LN2)) ** 2 - 0.4 ** 2 / 12);
  const offset_angstrom = Array.from({ length: 41 }, (_, k) => (k - 20) * 0.1);
  const weight = offset_angstrom.map((x) => Math.exp(-0.5 * (x / sigma) ** 2));
  const model: Model = { parts: ["spot"], spot: { sigma_kms: 5, equivalent_width_kms: 500 } };
  const gaussian = exposuresOf(model);
  const tabulated = exposuresOf(model, withArm({ profile: { offset_angstrom, weight } }));
  const peak = Math.max(...gaussian[0]!.flux);
  for (const [n, value] of gaussian[0]!.flux.entries()) {
    // The table's Gaussians of 0.06 Å add 1.1 % to the variance.
    assertAlmostEquals(tabulated[0]!.flux[n]!, value, 0.01 * peak);
  }
  // A profile with a red wing moves the line to the red.
  const skew = offset_angstrom.map((x) => x < -0.3 ? 0 : Math.exp(-(x + 0.3) / 0.6));
  const winged = exposuresOf(model, withArm({ profile: { offset_angstrom, weight: skew } }));
  const level = mean(gaussian[0]!.flux.slice(0, 30));
  const centre = (flux: Float64Array) => {
    const light = flux.map((value) => value - level);
    return light.reduce((sum, value, n) => sum + value * n, 0) / light.reduce((a, b) => a + b);
  };
  const shift = offset_angstrom.reduce((sum, x, k) => sum + x * skew[k]!, 0) /
    skew.reduce((a, b) => a + b);
  assertAlmostEquals((centre(winged[0]!.flux) - centre(gaussian[0]!.flux)) * 0.4, shift, 0.05);
});

Deno.test("observe() dims the continuum in eclipse and hides lines with it", () => {
  const model: Model = {
    parts: ["disc"],
    eclipse: { enabled: true, continuum_accretor: 0.4, continuum_disc: 0.4 },
  };
  // The start that gives mid-exposure at a phase: one guess, corrected for the light time.
  const { ephemeris } = observation;
  const exposures = [0, 0.3].map((phase) => {
    const guess = [2460311, ephemeris.zero[1] + phase * ephemeris.period_d] as const;
    const { bjd } = midExposureBjd({ date: guess, exposure_s: 30 }, observation);
    const late = (orbitalPhase(ephemeris, bjd).phase - phase) * ephemeris.period_d;
    return { start: [2460311, guess[1] - late] as const, exposure_s: 30 };
  });
  const edge_on = { ...binary, inclination_deg: 82 };
  const [inside, outside] = exposuresOf(model, { exposures, binary: edge_on });
  const level = (one: typeof inside) => mean(one!.flux.slice(0, 20));
  assertLess(level(inside) / level(outside), 0.55);
  assertGreater(level(inside) / level(outside), 0.19);
  const line = (one: typeof inside) =>
    one!.flux.reduce((sum, value) => sum + value - level(one), 0);
  assertLess(line(inside) / line(outside), 0.5);
});

Deno.test("observe() names what cannot be observed", () => {
  const message = (changes: Parameters<typeof exposuresOf>[1]) =>
    assertThrows(() => exposuresOf(NOTHING, changes), InputError).message;
  assertEquals(
    message(withArm({ resolution_angstrom: 0.4 })),
    "Cannot lay out pixels as the resolution must be at least 1.2 pixels, 0.4800 Å: current value is 0.4 Å (key resolution_angstrom)",
  );
  assertEquals(
    message({ exposures: [] }),
    "Cannot simulate exposures as there must be exposures: current value is 0",
  );
  assertEquals(
    message(withArm({ signal_to_noise: 0 })),
    "Cannot simulate exposures as the signal to noise must be positive and below 100000: current value is 0 (key signal_to_noise)",
  );
  const profile = { offset_angstrom: [0, 1, 3], weight: [1, 1, 1] };
  assert(
    assertThrows(() => exposuresOf({ parts: ["disc"] }, withArm({ profile })), InputError).message
      .includes("offsets must be even"),
  );
  assertThrows(
    () => planExposures([2460311, 0], { count: 0, exposure_s: 1 }),
    InputError,
    "at least 1",
  );
  assertThrows(
    () => planExposures([2460311, 0], { count: 2, exposure_s: -1 }),
    InputError,
    "exposure time must be positive",
  );
});

Deno.test("observe() writes raw exposures that every layout holds", () => {
  const raw = observe({ parts: ["disc"] }, observation, { stream: randomStream(1) });
  for (const layout of ["image", "table", "stack", "text"] as const) {
    const files = encodeExposures(raw, { layout });
    assertEquals(files.length, { image: 6, table: 6, stack: 1, text: 7 }[layout]);
  }
});
