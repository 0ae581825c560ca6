import { assert, assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import { lineNamed } from "../../engine/sky/mod.ts";
import { identifyLines, type MeanSpectrum, meanSpectrum } from "../../engine/trail/mod.ts";
import { C_KMS, madeSpectra } from "./made_spectra.ts";

// A mean spectrum with double-peaked lines of stated strength (negative: in absorption).
function spectrum(
  lines: readonly (readonly [name: string, height: number])[],
  options: { seed?: number; noise?: number; slope?: number; width_kms?: number } = {},
): MeanSpectrum {
  const { seed = 1, noise = 0.003, slope = -1.5, width_kms = 350 } = options;
  const random = randomStream(seed);
  const wavelength_angstrom = Float64Array.from({ length: 1600 }, (_, i) => 4350 + 0.6 * i);
  const flux = wavelength_angstrom.map((w) => {
    const sum = lines.reduce((total, [name, height]) => {
      const v = C_KMS * (w / lineNamed(name).vacuum_angstrom - 1);
      const peak = (c: number) => Math.exp(-0.5 * ((v - c) / width_kms) ** 2);
      return total + height * (width_kms < 200 ? peak(0) : peak(-600) + peak(600));
    }, 0);
    return (w / 4700) ** slope * (1 + sum) + noise * random.normal();
  });
  return { wavelength_angstrom, flux, error: flux.map(() => noise), exposures: 60 };
}

const seen = (mean: MeanSpectrum, half_width_kms: number) =>
  identifyLines(mean, { half_width_kms }).filter((found) => found.seen);
const names = (mean: MeanSpectrum, half_width_kms: number) =>
  seen(mean, half_width_kms).map(({ line }) => line.name);

Deno.test("identifyLines() finds the lines that are there and takes no wing for a line", () => {
  for (let seed = 1; seed <= 10; seed++) {
    const mean = spectrum([["H beta", 1], ["He II 4686", 0.15]], { seed });
    for (const half of [1300, 1500, 1800]) {
      assertEquals(names(mean, half), ["He II 4686", "H beta"], `seed ${seed}, ${half} km/s`);
    }
  }
});

Deno.test("identifyLines() finds nothing in a continuum, however it slopes", () => {
  for (const slope of [-4, 0, 2]) {
    for (let seed = 1; seed <= 5; seed++) {
      assertEquals(names(spectrum([], { seed, slope }), 1500), [], `slope ${slope}`);
    }
  }
});

Deno.test("identifyLines() finds a weaker line that stands out of a stronger one's wing", () => {
  const mean = spectrum([["He II 4686", 0.5], ["Bowen blend", 0.3], ["H beta", 1]], {
    width_kms: 150,
  });
  const found = seen(mean, 700);
  assertEquals(found.map(({ line }) => line.name), ["Bowen blend", "He II 4686", "H beta"]);
  assert(found[0]!.blended_with.includes("N III 4641"));
  for (const { equivalent_width_angstrom } of found) assert(equivalent_width_angstrom > 0);
});

Deno.test("identifyLines() tells absorption by its sign and its width by the area", () => {
  const mean = spectrum([["H beta", -0.3]], { width_kms: 150 });
  const [line] = seen(mean, 700);
  // 0.3 × √(2π) × 150 km/s of a Gaussian, in Å at 4862.7 Å.
  const truth = -0.3 * Math.sqrt(2 * Math.PI) * 150 * 4862.7 / C_KMS;
  assertAlmostEquals(line!.equivalent_width_angstrom, truth, 4 * line!.error_angstrom);
});

Deno.test("meanSpectrum() leaves out cosmic rays and keeps an S-wave that few exposures show in one place", () => {
  const clean = madeSpectra({ count: 40, signal_to_noise: 60, spot: 2, spot_width_kms: 40 });
  const random = randomStream(3);
  const struck = clean.map((s) => {
    const flux = s.flux.slice();
    flux[random.integer(flux.length)]! += 2e4;
    return { ...s, flux };
  });
  const [without, with_hits] = [meanSpectrum(clean)!, meanSpectrum(struck)!];
  // 40 hits of 20 times the continuum on 660 pixels: a plain mean would be off by 190 errors in each.
  // Below 8σ a hit stays, as where the grids of two exposures share a pixel: 8/√40 = 1.3 errors of
  // the mean.
  const off = without.flux.map((f, i) => Math.abs(with_hits.flux[i]! - f) / without.error[i]!);
  assertLess(Math.max(...off), 2.6);
  // Nothing is left out of a clean set: the mean is the plain mean.
  const levels = clean.map((s) => s.flux.toSorted((a, b) => a - b)[s.flux.length >> 1]!);
  const plain = clean.reduce((sum, s, k) => sum + s.flux[250]! / levels[k]!, 0) / clean.length;
  assertAlmostEquals(without.flux[250]!, plain, 2e-3);
});
