import { randomStream } from "@millrace/millrace/numerics";
import {
  blockBootstrap,
  fitHypothesis,
  lineOf,
  makeProblem,
  makeWhitening,
  noiseBank,
  prepareProblem,
  residualTests,
  weighingData,
} from "@millrace/millrace/weighing";
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertNotEquals,
} from "@std/assert";
import { addNoise, drawNoise } from "../../engine/weighing/draw_noise.ts";
import { fitErrors } from "../../engine/weighing/fit_errors.ts";
import { fittedValues } from "../../engine/weighing/fitted_values.ts";
import { measureLineScale } from "../../engine/weighing/line_scale.ts";
import { binary, quick, rms, spotted } from "./made.ts";

const sets = [["disc"], ["disc", "spot"]] as const;

function prepare(options: Parameters<typeof quick>[1]) {
  const data = weighingData(quick(spotted(0.1), options));
  return prepareProblem(data, { binary }, { sets });
}

Deno.test("prepareProblem() measures flickering, and finds none when there is none", () => {
  const { line_scale } = prepare({ seed: 1, exposures: 60, flicker_rms: 0.06 });
  // 60 exposures with a memory of 0.05 of the orbit are some 20 independent ones: ± 16 %.
  assertAlmostEquals(line_scale.rms, 0.06, 3 * 0.16 * 0.06);
  const quiet = prepare({ seed: 1, exposures: 60 });
  assertLess(quiet.line_scale.rms, 3 * quiet.line_scale.rms_error);
});

Deno.test("prepareProblem() keeps flickering out of the spot's errors", () => {
  const width = (flicker_rms: number) => {
    const { problem, richest } = prepare({ seed: 3, flicker_rms });
    const { errors } = fittedValues(problem, richest, fitErrors(problem, richest));
    return errors["spot.vx_kms"]!;
  };
  assertAlmostEquals(width(0.1) / width(0), 1, 0.1);
});

Deno.test("prepareProblem() allows wavelengths to drift when a prior says so", () => {
  const trail = quick(spotted(0.1), { seed: 2 });
  const random = randomStream(5);
  const { start, count } = trail.sampling;
  const velocity_kms = trail.sampling.velocity_kms.slice();
  for (let i = 0; i < count; i++) {
    const shift = 15 * random.normal();
    for (let n = start[i]!; n < start[i + 1]!; n++) velocity_kms[n]! += shift;
  }
  const data = weighingData({ ...trail, sampling: { ...trail.sampling, velocity_kms } });
  const rigid = prepareProblem(data, { binary }, { sets });
  const loose = prepareProblem(data, { binary }, { sets, shift_kms: 15 });
  // N = 2400 samples: a good chi-square is within ±210.
  assert(rigid.richest.chi_square > 1.2 * data.flux.length);
  assertLess(loose.richest.chi_square, 1.1 * data.flux.length);
});

Deno.test("prepareProblem() lets errors of the continuum multiply the line, too", () => {
  const correlation = (continuum_error: number) => {
    const { problem, richest } = prepare({ seed: 5, exposures: 60, continuum_error });
    return residualTests(problem, richest).velocity_correlation.statistic;
  };
  // The noise is the same. Slopes that were only added would leave a slope times the line: 5 more.
  assertAlmostEquals(correlation(0.03), correlation(0), 0.5);
});

Deno.test("noiseBank() keeps unit variance, and drawNoise() whole blocks of exposures", () => {
  const { problem, richest, line_scale } = prepare({ seed: 4, flicker_rms: 0.05 });
  const bank = noiseBank(problem, richest, { line_scale });
  const { data } = problem;
  assertEquals(bank.kind, "resampled");
  // 2400 samples: ± 1.4 %.
  assertAlmostEquals(rms(bank.residual), 1, 0.045);
  assertAlmostEquals(rms(bank.excess) / line_scale.rms, 1, 0.2);

  const drawn = drawNoise(bank, { data, random: randomStream(1, 7) });
  const again = drawNoise(bank, { data, random: randomStream(1, 7) });
  const other = drawNoise(bank, { data, random: randomStream(1, 8) });
  assertEquals(drawn, again);
  assertNotEquals(drawn, other);
  const source = Array.from(
    drawn.excess,
    (value) => bank.excess.findIndex((other) => Math.abs(other) === Math.abs(value)),
  );
  const breaks = source.filter((j, i) => i > 0 && j !== (source[i - 1]! + 1) % source.length);
  assertEquals(breaks.length <= Math.ceil(source.length / bank.block), true);
});

Deno.test("drawNoise() leaves the line's brightness as uncertain as the noise of the data does", () => {
  const { problem, richest, line_scale } = prepare({ seed: 4 });
  const { data } = problem;
  const line = lineOf(problem, richest);
  const whitening = makeWhitening(data, { light: problem.options.light! });
  for (const kind of ["resampled", "white"] as const) {
    const bank = noiseBank(problem, richest, { line_scale, kind });
    let square = 0;
    for (let k = 0; k < 10; k++) {
      const noise = drawNoise(bank, { data, random: randomStream(3, k) });
      const flux = addNoise(line, { data, noise });
      const { excess, excess_error } = measureLineScale(line, {
        data: { ...data, flux },
        whitening,
      });
      excess.forEach((value, i) => square += (value / excess_error[i]!) ** 2 / excess.length / 10);
    }
    // Drawn from the 30 values of the data: a variance of 1 ± 0.26; three of that.
    assertAlmostEquals(square, 1, 0.78);
    assertGreater(square, 0.5);
  }
});

Deno.test("addNoise() scales the line and leaves its argument alone", () => {
  const { problem, richest, line_scale } = prepare({ seed: 4, flicker_rms: 0.05 });
  const bank = noiseBank(problem, richest, { line_scale });
  const { data } = problem;
  const line = new Float64Array(data.flux.length).fill(1);
  const noise = drawNoise(bank, { data, random: randomStream(2) });
  const flux = addNoise(line, { data, noise });
  assertEquals(line.every((value) => value === 1), true);
  assertAlmostEquals(flux[5]!, 1 + noise.excess[0]! + data.error[5]! * noise.residual[5]!, 1e-14);
});

Deno.test("drawNoise() makes white noise when there are too few exposures to draw from", () => {
  const data = weighingData(quick(spotted(0), { exposures: 8, seed: 1 }));
  const { problem, richest, line_scale } = prepareProblem(data, { binary }, { sets: [["disc"]] });
  const bank = noiseBank(problem, richest, { line_scale });
  assertEquals(bank.kind, "white");
  const { residual } = drawNoise(bank, { data, random: randomStream(1) });
  assertAlmostEquals(rms(residual), 1, 0.1);
});

Deno.test("blockBootstrap() agrees with the covariance when noise is white", () => {
  const { problem, richest, line_scale } = prepare({ seed: 9 });
  const bank = noiseBank(problem, richest, { line_scale });
  const { errors } = fittedValues(problem, richest, fitErrors(problem, richest));
  const { intervals } = blockBootstrap(problem, { fit: richest, bank, replicas: 40, seed: 2 });
  for (const path of ["spot.vx_kms", "spot.flux_fraction", "disc.outer_radius_over_a"]) {
    const [low, high] = intervals[path]!;
    // Half the width between quantiles of 40 replicas: ± 16 %.
    assertAlmostEquals((high - low) / 2 / errors[path]!, 1, 0.48);
  }
});

Deno.test("fitHypothesis() does not change the data", () => {
  const trail = quick(spotted(0.1), { seed: 1 });
  const before = structuredClone(trail);
  fitHypothesis(makeProblem(weighingData(trail), { binary }), { hypothesis: ["disc", "spot"] });
  assertEquals(trail, before);
});
