import { assert, assertAlmostEquals, assertEquals, assertGreater } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import type { Spectrum } from "../../engine/spectra/mod.ts";
import {
  correctZero,
  measureSkyLines,
  measureTelluric,
  reportZeros,
} from "../../engine/trail/mod.ts";
import { C_KMS } from "./made_spectra.ts";

const SKY = [5578.89, 5895.6, 6302.05];

// A continuum with sky lines or a telluric band that stand still for the observer, seen with flexure.
function night(
  flexure: (k: number) => number,
  options: { telluric?: boolean; noise?: number } = {},
): Spectrum[] {
  const random = randomStream(4);
  return Array.from({ length: 40 }, (_, k) => {
    const observer_factor = 1 + (10 + 0.2 * k) / C_KMS;
    const observed = Float64Array.from({ length: 1200 }, (_, i) => 5500 + 0.8 * i);
    const shift = 1 + flexure(k) / C_KMS;
    const clean = observed.map((w) => {
      const true_w = w / shift;
      const peak = (c: number, s: number) => Math.exp(-0.5 * ((true_w - c) / s) ** 2);
      return options.telluric
        ? 1000 * (1 - 0.5 * peak(6280, 4) - 0.3 * peak(6290, 3) - 0.4 * peak(6300, 5))
        : 300 + SKY.reduce((sum, line) => sum + 2000 * peak(line, 1.1), 0);
    });
    const error = clean.map(Math.sqrt);
    return {
      source: `${k}.fits`,
      group: 0,
      wavelength_angstrom: observed.map((w) => w * observer_factor),
      flux: clean.map((f, i) => f + (options.noise ?? 1) * error[i]! * random.normal()),
      error,
      errors_given: true,
      mid: [2460311, 0.002 * k] as const,
      exposure_s: 120,
      observer_factor,
      resolution_angstrom: observed.map(() => 2.6),
    };
  });
}

Deno.test("measureSkyLines() finds a flexure of 15 km/s that drifts through the night", () => {
  const flexure = (k: number) => 15 * (k / 39) - 5;
  const shifts = measureSkyLines(night(flexure), { lines_angstrom: SKY });
  let chi = 0;
  shifts.forEach((s, k) => {
    assertEquals(s.features, 3);
    chi += ((s.shift_kms - flexure(k)) / s.error_kms) ** 2 / shifts.length;
  });
  // Chi-square per degree of freedom of 40 scatters by 0.22.
  assertAlmostEquals(chi, 1, 0.7);
});

Deno.test("reportZeros() tells what a drift with phase would add to a K velocity", () => {
  const flexure = (k: number) => 7 * Math.sin(2 * Math.PI * k / 40);
  const shifts = measureSkyLines(night(flexure), { lines_angstrom: SKY });
  const report = reportZeros(shifts, shifts.map((_, k) => k / 40))!;
  assertAlmostEquals(report.orbital_kms, 7, 3 * report.orbital_error_kms);
  assertGreater(report.scatter_kms, 3);
  assertEquals(reportZeros(shifts.slice(0, 3), [0, 0, 0]), null);
});

Deno.test("correctZero() puts sky lines back where they belong and leaves its input alone", () => {
  const spectra = night((k) => 10 + k / 10, { noise: 0 });
  const before = structuredClone(spectra);
  const shifts = measureSkyLines(spectra, { lines_angstrom: SKY });
  const after = measureSkyLines(correctZero(spectra, shifts), { lines_angstrom: SKY });
  assertEquals(spectra, before);
  for (const s of after) assert(Math.abs(s.shift_kms) < 0.01, `${s.shift_kms}`);
});

Deno.test("measureTelluric() finds relative shifts from absorption bands", () => {
  const flexure = (k: number) => 15 * (k / 39);
  const shifts = measureTelluric(night(flexure, { telluric: true }), {
    ranges_angstrom: [[6240, 6340]],
  });
  const mean = shifts.reduce((sum, s) => sum + s.shift_kms, 0) / 40;
  const worst = Math.max(...shifts.map((s, k) => Math.abs(s.shift_kms - mean - flexure(k) + 7.5)));
  assert(worst < 4 * shifts[0]!.error_kms + 1, `${worst} against ${shifts[0]!.error_kms}`);
});

Deno.test("measureSkyLines() says so when the observer's frame is not known or lines are too faint", () => {
  const spectra = night(() => 0);
  const unknown = spectra.map((s) => ({ ...s, observer_factor: null }));
  assert(Number.isNaN(measureSkyLines(unknown, { lines_angstrom: SKY })[0]!.shift_kms));
  const faint = measureSkyLines(spectra, { lines_angstrom: [5700] });
  assertEquals(faint[0]!.features, 0);
});

Deno.test("reportZeros() takes a drift apart from the sinusoid when phases are uneven", () => {
  // Three quarters of an orbit only: a plain projection would mix the constant into the amplitude.
  const phase = Array.from({ length: 30 }, (_, k) => 0.75 * k / 30);
  const shifts = phase.map((p) => ({
    source: "",
    shift_kms: 40 + 6 * Math.cos(2 * Math.PI * (p - 0.1)),
    error_kms: NaN,
    features: 1,
  }));
  const report = reportZeros(shifts, phase)!;
  assertAlmostEquals(report.orbital_kms, 6, 1e-9);
  assertAlmostEquals(report.orbital_error_kms, 0, 1e-9);
});

Deno.test("measureSkyLines() takes no broad line of the target for one of the sky", () => {
  const spectra = night(() => 0, { noise: 0.1 }).map((s) => ({
    ...s,
    flux: s.flux.map((_, i) => {
      const w = s.wavelength_angstrom[i]! / s.observer_factor!;
      return 300 + 2000 * Math.exp(-0.5 * ((w - 5700) / 3.5) ** 2);
    }),
  }));
  assertEquals(measureSkyLines(spectra, { lines_angstrom: [5700] })[0]!.features, 0);
});
