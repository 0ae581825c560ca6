import { spotPlace, synthesize } from "@millrace/millrace/synthesis";
import {
  fitHypothesis,
  makeProblem,
  profileLikelihood,
  weighingData,
} from "@millrace/millrace/weighing";
import { InputError } from "@millrace/millrace/errors";
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertThrows,
} from "@std/assert";
import { fitErrors } from "../../engine/weighing/fit_errors.ts";
import { fittedValues } from "../../engine/weighing/fitted_values.ts";
import { valuesOf } from "../../engine/weighing/fit_hypothesis.ts";
import { binary, quick, rms, spotted, WIDTH } from "./made.ts";

const model = spotted(0.1);
const hypothesis = ["disc", "spot"] as const;

/** The model itself, with errors but without noise. */
function noiseless() {
  const trail = quick(model, { seed: 1 });
  return { ...trail, flux: synthesize(model, { binary, sampling: trail.sampling }) };
}

Deno.test("fitHypothesis() finds the numbers behind data without noise", () => {
  const problem = makeProblem(weighingData(noiseless()), { binary });
  const fit = fitHypothesis(problem, { hypothesis });
  const values = valuesOf(fit);
  // What is left is the fast disc against the exact one: 1e-3 of the peak.
  assertAlmostEquals(values.get("disc.outer_radius_over_a")!, 0.3, 1e-3);
  assertAlmostEquals(values.get("disc.inner_radius_over_a")!, 0.05, 5e-4);
  assertAlmostEquals(values.get("disc.emissivity_index")!, 1.5, 5e-3);
  assertAlmostEquals(values.get("spot.radius_over_a")!, 0.3, 1e-3);
  assertAlmostEquals(values.get("spot.mixing")!, 0.4, 5e-3);
  assertAlmostEquals(values.get("spot.sigma_kms")!, 60, 0.5);
  assertAlmostEquals(fit.evaluation.amplitudes.get("spot")![0]! / WIDTH, 0.1, 5e-4);
  assertLess(rms(fit.evaluation.residual), 0.05);
  assert(fit.converged);
});

Deno.test("fitHypothesis() finds the same from several starts, and the same bytes twice", () => {
  const problem = makeProblem(weighingData(quick(model, { seed: 4 })), { binary });
  const one = fitHypothesis(problem, { hypothesis, starts: 2, seed: 3 });
  assertEquals(one.starts.length, 3);
  assertLess(one.starts[1]! - one.starts[0]!, 0.1);
  const again = makeProblem(weighingData(quick(model, { seed: 4 })), { binary });
  assertEquals(fitHypothesis(again, { hypothesis, starts: 2, seed: 3 }).values, one.values);
});

Deno.test("fitHypothesis() gives a spot hardly any light when there is none", () => {
  const problem = makeProblem(weighingData(quick(spotted(0), { seed: 2 })), { binary });
  const disc = fitHypothesis(problem, { hypothesis: ["disc"] });
  const fit = fitHypothesis(problem, { hypothesis, base: disc });
  const light = fit.evaluation.amplitudes.get("spot")![0]!;
  assert(light >= 0);
  assertLess(light / WIDTH, 0.01);
  assertLess(fit.chi_square, disc.chi_square + 1e-6);
});

Deno.test("fitHypothesis() is not misled by levels and slopes of the continuum", () => {
  const trail = noiseless();
  const tilted = trail.flux.map((value, n) => value + 0.1 - trail.sampling.velocity_kms[n]! / 2e4);
  const plain = fitHypothesis(makeProblem(weighingData(trail), { binary }), { hypothesis });
  const fit = fitHypothesis(makeProblem(weighingData({ ...trail, flux: tilted }), { binary }), {
    hypothesis,
  });
  plain.values.forEach((value, j) =>
    assertAlmostEquals(fit.values[j]!, value, 1e-6 * Math.abs(value) + 1e-6)
  );
});

Deno.test("fitHypothesis() moves the geometry as far as its prior and the data agree", () => {
  const trail = noiseless();
  const errors = { systemic_kms: 20, k_accretor_kms: 15, phase: 0.01 };
  const setup = { binary: { ...binary, k_accretor_kms: 80 }, systemic_kms: 12, errors };
  const problem = makeProblem(weighingData(trail), setup);
  const fit = fitHypothesis(problem, { hypothesis });
  const values = valuesOf(fit);
  assertAlmostEquals(values.get("geometry.systemic_kms")!, 0, 1);
  assertAlmostEquals(values.get("geometry.k_accretor_kms")!, 70, 1.5);
  assertAlmostEquals(values.get("geometry.phase")!, 0, 2e-3);
});

Deno.test("fitHypothesis() keeps what is fixed and frees what is asked for", () => {
  const problem = makeProblem(weighingData(quick(model, { seed: 5 })), {
    binary,
    model: { spot: { sigma_kms: 90 } },
    fixed: ["spot.sigma_kms"],
    free: ["disc.turbulence_kms"],
  });
  const { parameters, state } = fitHypothesis(problem, { hypothesis });
  assertEquals(state.model.spot.sigma_kms, 90);
  assert(parameters.some(({ path }) => path === "disc.turbulence_kms"));
  assertThrows(
    () =>
      fitHypothesis(makeProblem(problem.data, { binary, free: ["disc.colour"] }), { hypothesis }),
    InputError,
    "disc.colour",
  );
});

Deno.test("fittedValues() puts errors on the spot's place that noise bears out", () => {
  const truth = spotPlace(model, binary);
  const pulls: number[] = [];
  for (let seed = 1; seed <= 12; seed++) {
    const problem = makeProblem(weighingData(quick(model, { seed })), { binary });
    const fit = fitHypothesis(problem, { hypothesis });
    const { fitted, errors } = fittedValues(problem, fit, fitErrors(problem, fit));
    pulls.push((fitted["spot.vx_kms"]! - truth.vx_kms) / errors["spot.vx_kms"]!);
    pulls.push((fitted["spot.vy_kms"]! - truth.vy_kms) / errors["spot.vy_kms"]!);
    pulls.push((fitted["spot.flux_fraction"]! - 0.1) / errors["spot.flux_fraction"]!);
  }
  // 36 pulls of unit variance: their root mean square is 1 ± 0.12; three of that.
  assertAlmostEquals(rms(pulls), 1, 0.36);
});

Deno.test("fittedValues() keeps within the limits when a fit ends close to one of them", () => {
  const problem = makeProblem(weighingData(quick(model, { seed: 1 })), { binary });
  const fit = fitHypothesis(problem, { hypothesis });
  const errors = fitErrors(problem, fit);
  const mixing = errors.names.indexOf("spot.mixing");
  const errorAt = (value: number) => {
    const values = errors.values.slice();
    values[mixing] = value;
    return fittedValues(problem, fit, { ...errors, values }).errors["spot.vx_kms"]!;
  };
  assertAlmostEquals(errorAt(1 - 1e-9), errorAt(0.999), 0.01 * errorAt(0.999));
  assertAlmostEquals(errorAt(1e-9), errorAt(0.001), 0.01 * errorAt(0.001));
  // A spot that hardly shines says nothing of its mixing.
  const covariance = errors.covariance.slice();
  covariance[mixing * errors.names.length + mixing] = 1e8;
  const { errors: wide } = fittedValues(problem, fit, { ...errors, covariance });
  assertGreater(wide["spot.mixing"]!, 9999);
});

Deno.test("profileLikelihood() grows by one at one standard deviation", () => {
  const problem = makeProblem(weighingData(quick(model, { seed: 6 })), { binary });
  const fit = fitHypothesis(problem, { hypothesis });
  const { fitted, errors } = fittedValues(problem, fit, fitErrors(problem, fit));
  const path = "spot.mixing";
  const values = [-1, 0, 1].map((k) => fitted[path]! + k * errors[path]!);
  const { gain } = profileLikelihood(problem, { fit, path, values });
  assertAlmostEquals(gain[0]!, 1, 0.15);
  assertAlmostEquals(gain[1]!, 0, 0.01);
  assertAlmostEquals(gain[2]!, 1, 0.15);
  assertThrows(
    () => profileLikelihood(problem, { fit, path: "spot.tail_deg", values }),
    InputError,
    "spot.tail_deg",
  );
});
