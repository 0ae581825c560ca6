import { assert, assertAlmostEquals, assertEquals, assertGreater } from "@std/assert";
import { describeTrail, makeTrail, pairNoise, type TrailOptions } from "../../engine/trail/mod.ts";
import { C_KMS, EPHEMERIS, H_BETA, madeSpectra, type Making } from "./made_spectra.ts";

const EPOCH = [2460311, 0.55] as const;

function described(making: Making = {}, options: Partial<TrailOptions> = {}) {
  const trail = makeTrail(madeSpectra(making), {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: [[-8000, -3000], [5800, 7800]],
    ...options,
  });
  return describeTrail(trail, {
    ephemeris: options.ephemeris ?? EPHEMERIS,
    epoch: EPOCH,
    velocity_kms: 800,
  });
}

Deno.test("describeTrail() tells smear, resolution and exposures needed in the stated formulas", () => {
  const d = described({ count: 60, orbits: 1.3 });
  // 2π × 800 km/s × 0.9 × 1.3 / 60 of an orbit.
  assertAlmostEquals(d.smear_kms.median, 2 * Math.PI * 800 * 0.0195, 1e-6);
  assertAlmostEquals(d.resolution_kms.median, 73.98, 0.01);
  assertEquals(d.directions_needed, Math.ceil(Math.PI * 800 / 73.98));
  assertGreater(d.directions_observed, 0.7 * d.directions_needed);
  assertAlmostEquals(d.span_orbits, 1.3 * 59 / 60, 1e-6);
  assertEquals(d.net, "emission");
  assertEquals(d.warnings.map((w) => w.code), []);
});

Deno.test("describeTrail() tells the continuum's signal to noise in a resolution element", () => {
  const d = described({ signal_to_noise: 30 });
  // 2.4 pixels of 30.8 km/s in 73.98 km/s; the continuum slopes by 4 % at the ends of the reach.
  assertAlmostEquals(d.signal_to_noise.median, 30 * Math.sqrt(2.4), 3);
});

Deno.test("describeTrail() warns of gaps, smearing, few exposures and an uncertain phase", () => {
  const codes = (making: Making, options: Partial<TrailOptions> = {}) =>
    described(making, options).warnings.map((w) => w.code);
  assert(codes({ count: 20, orbits: 0.3 }).includes("phase-gap"));
  assert(codes({ count: 12, orbits: 1 }).includes("smeared"));
  assert(codes({ count: 12, orbits: 1 }).includes("few-exposures"));
  assert(
    codes({}, { ephemeris: { ...EPHEMERIS, zero_error_d: 0.004 } }).includes("phase-uncertain"),
  );
  assert(
    codes({}, { ephemeris: { ...EPHEMERIS, zero_marks: "emission-crossing" } }).includes(
      "zero-not-donor",
    ),
  );
});

Deno.test("describeTrail() counts directions over nights apart, and the same phases only once", () => {
  const whole = described({ count: 12, orbits: 1 });
  // A day of 12.5 orbits: the second night falls half an orbit on, onto the same directions.
  const nights = [0, 1].flatMap((start_d) => madeSpectra({ count: 12, orbits: 1, start_d }));
  const trail = makeTrail(nights, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: [[-8000, -3000], [5800, 7800]],
  });
  const both = describeTrail(trail, { ephemeris: EPHEMERIS, epoch: EPOCH, velocity_kms: 800 });
  assertEquals(both.exposures, 24);
  // Twelve exposures of one orbit are six directions, each seen twice.
  assertEquals([whole.directions_observed, both.directions_observed], [6, 6]);
});

Deno.test("describeTrail() recognises net absorption and a core below the continuum", () => {
  assertEquals(described({ line: 0, spot: 0, absorption: 0.4 }).net, "absorption");
  assertEquals(
    described({ line: 1.2, spot: 0, absorption: 0.6 }).net,
    "emission with absorption core",
  );
});

Deno.test("describeTrail() finds repeats and mirrored pairs of noise as stated", () => {
  // Without a spot and with a still disc all phases look alike: pairs differ by noise alone, but
  // for the 60 km/s of the accretor, which is the same at the same phase and mirrored half an orbit on.
  const d = described({ count: 100, orbits: 2, spot: 0 });
  assertAlmostEquals(d.pairs.repeat!.scale, 1, 0.1);
  assertAlmostEquals(d.pairs.mirror!.scale, 1, 0.1);
  assertGreater(d.pairs.repeat!.pairs, 40);
  // With a spot that moves sideways of the mirror's rule the mirror still holds: it is transparent.
  assertAlmostEquals(described({ count: 100, orbits: 2 }).pairs.mirror!.scale, 1, 0.15);
});

Deno.test("pairNoise() mirrors about the systemic velocity", () => {
  const moved = madeSpectra({ count: 100, orbits: 2, spot: 0 }).map((s) => ({
    ...s,
    wavelength_angstrom: s.wavelength_angstrom.map((w) => w * (1 + 150 / C_KMS)),
  }));
  const trail = makeTrail(moved, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    continuum_kms: [[-8000, -3000], [5800, 7800]],
  });
  assertAlmostEquals(pairNoise(trail, { systemic_kms: 150 }).mirror!.scale, 1, 0.1);
  assertGreater(pairNoise(trail).mirror!.scale, 2);
});

Deno.test("describeTrail() counts correlated pixels for what they are worth", () => {
  const trail = makeTrail(madeSpectra(), { line: H_BETA, ephemeris: EPHEMERIS });
  const of = (correlation_length_pixels: number) =>
    describeTrail({ ...trail, noise: { ...trail.noise, correlation_length_pixels } }, {
      ephemeris: EPHEMERIS,
      epoch: EPOCH,
    })
      .signal_to_noise.median;
  assertAlmostEquals(of(1) / of(4), 2, 1e-9);
});
