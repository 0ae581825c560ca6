import {
  compactTrail,
  compareHypotheses,
  detectionLimit,
  noiseBank,
  prepareProblem,
  strongestSource,
  weighingData,
} from "@millrace/millrace/weighing";
import { assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { searchCell, tangentOf } from "../../engine/weighing/compact_search.ts";
import { dot } from "../../engine/weighing/brightnesses.ts";
import { binary, quick, spotted, WIDTH } from "./made.ts";

const sets = [["disc"]] as const;
const grid = { cells: 7, half_width_kms: 900 };

function search(options: Parameters<typeof quick>[1] = {}, more = {}) {
  const data = weighingData(quick(spotted(0), options));
  const prepared = prepareProblem(data, { binary }, { sets });
  const { problem, richest, line_scale } = prepared;
  const { fit, fit_errors } = compareHypotheses(prepared, sets).hypotheses[0]!;
  const bank = noiseBank(problem, richest, { line_scale });
  return {
    problem,
    fit,
    fit_errors,
    found: detectionLimit(problem, { fit, fit_errors, bank, grid, trials: 200, ...more }),
  };
}

Deno.test("detectionLimit() is what injected sources of other noise confirm", () => {
  const { found } = search({ seed: 1 });
  const cell = 2 * 7 + 5; // (600, −300) km/s
  const flux = found.limit.fraction_95[cell]! * WIDTH;
  let recovered = 0;
  for (let seed = 101; seed <= 140; seed++) {
    const trail = quick(spotted(0), { seed });
    const source = compactTrail({ vx_kms: 600, vy_kms: -300, sigma_kms: 60 }, trail);
    const injected = {
      ...trail,
      flux: trail.flux.map((value, n) => value + flux * source[n]!),
    };
    const data = weighingData(injected);
    const prepared = prepareProblem(data, { binary }, { sets, line_scale: 0 });
    const { fit, fit_errors } = compareHypotheses(prepared, sets).hypotheses[0]!;
    const { filter } = searchCell(prepared.problem, {
      fit,
      tangent: tangentOf(fit_errors),
      source: { vx_kms: 600, vy_kms: -300, sigma_kms: 60 },
    });
    if (dot(filter, fit.evaluation.residual) > found.limit.threshold) recovered++;
  }
  // 40 × 0.95 = 38 ± 1.4; the limit's own error, some 4 %, is another 2 %.
  assertGreater(recovered, 33);
});

Deno.test("detectionLimit() falls as signal over noise grows, and 50 % comes before 95 %", () => {
  const poor = search({ seed: 2, signal_to_noise: 8 }).found.limit;
  const good = search({ seed: 2, signal_to_noise: 24 }).found.limit;
  for (let c = 0; c < 49; c++) {
    assertLess(good.fraction_50[c]!, good.fraction_95[c]!);
    assertAlmostEquals(poor.fraction_95[c]! / good.fraction_95[c]!, 3, 1);
  }
});

Deno.test("detectionLimit() hardly cares for flickering, which has no weight", () => {
  const quiet = search({ seed: 3 }).found.limit;
  const wild = search({ seed: 3, flicker_rms: 0.08 }).found.limit;
  // Quantiles of 200 trials: some 7 %.
  quiet.fraction_95.forEach((value, c) => assertLess(wild.fraction_95[c]! / value!, 1.5));
});

Deno.test("detectionLimit() takes a threshold that a calibration gave", () => {
  const { limit } = search({ seed: 1 }, { threshold: 25 }).found;
  assertEquals([limit.threshold, limit.threshold_error], [5, 0]);
});

Deno.test("detectionLimit() asks for less when place and width are fitted", () => {
  const held = search({ seed: 1 }, { threshold: 18 }).found.limit;
  const free = search({ seed: 1 }, { threshold: 18, refit: true }).found.limit;
  // Noise along three more directions: chi-square grows by 3 on average, and √18 − √15 = 0.37 of a
  // signal of some 5.9 is 6 %; its scatter, ± √6, takes part of that back at 95 %.
  const ratio = free.fraction_95.map((value, c) => value! / held.fraction_95[c]!);
  const mean = ratio.reduce((sum, value) => sum + value, 0) / ratio.length;
  assertAlmostEquals(mean, 0.955, 0.025);
});

Deno.test("strongestSource() finds a source where it was put, with its light", () => {
  const trail = quick(spotted(0), { seed: 7 });
  const source = { vx_kms: 530, vy_kms: -410, sigma_kms: 80 };
  const light = compactTrail(source, trail);
  const flux = trail.flux.map((value, n) => value + 0.03 * WIDTH * light[n]!);
  const data = weighingData({ ...trail, flux });
  const prepared = prepareProblem(data, { binary }, { sets });
  const { problem, richest, line_scale } = prepared;
  const { fit, fit_errors } = compareHypotheses(prepared, sets).hypotheses[0]!;
  const bank = noiseBank(problem, richest, { line_scale });
  const found = strongestSource(problem, {
    fit,
    search: detectionLimit(problem, { fit, fit_errors, bank, grid, trials: 50 }),
  })!;
  const [xx, , yy] = found.covariance;
  assertLess(Math.abs(found.vx_kms - 530) / Math.sqrt(xx), 3.5);
  assertLess(Math.abs(found.vy_kms + 410) / Math.sqrt(yy), 3.5);
  assertLess(Math.sqrt(xx), 20);
  assertAlmostEquals(found.flux_fraction, 0.03 / 1.03, 0.003);
  assertEquals(found.false_alarm.value, 1 / 51);
});
