import { synthesize } from "@millrace/millrace/synthesis";
import {
  compareHypotheses,
  isAdequate,
  prepareProblem,
  type WeighableTrail,
  weighingData,
} from "@millrace/millrace/weighing";
import { assert, assertEquals, assertGreater, assertLess } from "@std/assert";
import { binary, quick, spotted, WIDTH } from "./made.ts";

const sets = [["disc"], ["disc", "spot"]] as const;

function compare(
  trail: WeighableTrail,
  weighed: readonly (readonly ["disc", ...("spot")[]])[] = sets,
) {
  const prepared = prepareProblem(weighingData(trail), { binary }, { sets: weighed });
  return compareHypotheses(prepared, weighed);
}

Deno.test("residualTests() lets the right model pass, quiet or flickering", () => {
  let objections = 0;
  const probabilities: number[] = [];
  for (let seed = 1; seed <= 10; seed++) {
    const trail = quick(spotted(0.1), { seed, flicker_rms: seed % 2 === 0 ? 0.06 : 0 });
    const { hypotheses } = compare(trail, [["disc", "spot"]]);
    if (!hypotheses[0]!.adequate) objections++;
    probabilities.push(hypotheses[0]!.residual_tests.velocity_correlation.probability);
  }
  // Five tests at 0.001 on ten sets: 0.05 objections expected.
  assertEquals(objections, 0);
  assertGreater(probabilities.filter((p) => p > 0.5).length, 0);
  assertGreater(probabilities.filter((p) => p < 0.5).length, 0);
});

Deno.test("residualTests() object when a thick disc is fitted as a thin one", () => {
  const trail = quick({
    parts: ["disc"],
    disc: { equivalent_width_kms: WIDTH, optical_depth: "thick" },
  }, { seed: 1 });
  for (const { adequate, misfit_fraction } of compare(trail).hypotheses) {
    assert(!adequate);
    assertGreater(misfit_fraction, 0.02);
  }
});

Deno.test("residualTests() object to the mean profile when a neighbour is in the window", () => {
  const trail = quick(spotted(0), { seed: 1 });
  const { sampling } = trail;
  const velocity_kms = sampling.velocity_kms.map((v) => v - 1500);
  const weak = synthesize(spotted(0), { binary, sampling: { ...sampling, velocity_kms } });
  const flux = trail.flux.map((value, n) => value + 0.08 * weak[n]!);
  const [best] = compare({ ...trail, flux }).hypotheses;
  assert(!best!.adequate);
  assertLess(best!.residual_tests.profile.probability, 1e-6);
  assertGreater(best!.residual_tests.phase.probability, 1e-3); // it does not change with phase
});

Deno.test("residualTests() object to the change with phase when a spot is left out", () => {
  const { hypotheses } = compare(quick(spotted(0.05), { seed: 2 }));
  const disc = hypotheses.find(({ parts }) => parts.length === 1)!;
  assertLess(disc.residual_tests.phase.probability, 1e-9);
  assert(!isAdequate(disc.residual_tests));
  assert(hypotheses[0]!.parts.length === 2 && hypotheses[0]!.adequate);
});

Deno.test("residualTests() but chi-square do not care when all errors are wrong by a factor", () => {
  const trail = quick(spotted(0.1), { seed: 3 });
  const wrong = { ...trail, error: trail.error.map((value) => 0.7 * value) };
  const [right] = compare(trail).hypotheses;
  const [scaled] = compare(wrong).hypotheses;
  assertLess(scaled!.residual_tests.chi_square.probability, 1e-3);
  for (const test of ["profile", "phase", "velocity_correlation", "phase_correlation"] as const) {
    const difference = right!.residual_tests[test].probability -
      scaled!.residual_tests[test].probability;
    // Too much noise looks like a little flickering as well, whose share is then not tested.
    assertLess(Math.abs(difference), 0.12);
  }
});

Deno.test("compareHypotheses() counts samples and parameters as they were used", () => {
  const trail = quick(spotted(0.1), { seed: 1 });
  const { hypotheses, noise_scale } = compare(trail);
  for (
    const { parts, sample_count, free_parameters, effective_parameters, aicc, bic } of hypotheses
  ) {
    assertEquals(sample_count, trail.flux.length);
    // Two terms of a baseline for each of 30 exposures; a disc has 3 numbers and 5 amplitudes, a spot 3 and 1.
    assertEquals(free_parameters, 60 + 8 + (parts.length === 2 ? 4 : 0));
    assertLess(Math.abs(effective_parameters - free_parameters), 30);
    assertGreater(bic, aicc);
  }
  assertLess(Math.abs(noise_scale - 1), 0.06);
});

Deno.test("residualTests() takes no offence at flickering with a memory", () => {
  const mean = { velocity_correlation: 0, phase_correlation: 0 };
  for (let seed = 1; seed <= 8; seed++) {
    const trail = quick(spotted(0), { seed, exposures: 40, pixel_kms: 100, flicker_rms: 0.1 });
    const { residual_tests } = compare(trail, [["disc"]]).hypotheses[0]!;
    mean.velocity_correlation += residual_tests.velocity_correlation.statistic / 8;
    mean.phase_correlation += residual_tests.phase_correlation.statistic / 8;
  }
  // Of unit variance each: ± 0.35; three of that.
  assertLess(Math.abs(mean.velocity_correlation), 1.06);
  assertLess(Math.abs(mean.phase_correlation), 1.06);
});
