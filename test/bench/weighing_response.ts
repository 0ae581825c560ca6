/**
 * How far noise moves a spot with 10 % of the light, to first order: the fit's response, known from its
 * derivatives, to the noise of seeds 1 to N (default 2000). So many fits would take hours; the first
 * three are made, to show by how many standard deviations they differ from their response.
 *
 *     deno run --allow-read test/bench/weighing_response.ts [N]
 */
import { spotPlace, synthesize } from "@millrace/millrace/synthesis";
import {
  compareHypotheses,
  fitHypothesis,
  prepareProblem,
  weighingData,
} from "@millrace/millrace/weighing";
import { fitErrors } from "../../engine/weighing/fit_errors.ts";
import { withFlux } from "../../engine/weighing/problem.ts";
import { spotted } from "../weighing/made.ts";
import { binary, row, trailOf } from "./weighing_data.ts";

const seeds = Number(Deno.args[0] ?? 2000);
const FITS = 3;
const sets = [["disc", "spot"]] as const;
const model = spotted(0.1);
const names = ["spot.vx_kms", "spot.vy_kms", "spot.flux_fraction"];

row(
  "data",
  "quantity",
  "sets",
  "within 1 σ",
  "mean pull",
  "rms pull",
  `${FITS} fits, off by at most`,
);
row("---", "---", "---", "---", "---", "---", "---");
for (const [name, flicker_rms] of [["quiet", 0], ["flickering 6 %", 0.06]] as const) {
  const dataOf = (seed: number) => weighingData(trailOf(model, { seed, flicker_rms }));
  const prepare = (seed: number) =>
    prepareProblem(dataOf(seed), { binary }, { sets, line_scale: flicker_rms });
  const { problem, richest } = prepare(1);
  const line = synthesize(model, { binary, sampling: problem.data.sampling });
  const clean = withFlux(problem, line);
  const fit = fitHypothesis(clean, { hypothesis: sets[0], base: richest });
  const errors = fitErrors(clean, fit);
  const { values, covariance, derivatives } = errors;
  const size = values.length;
  const at = (all: Float64Array, key: string) => all[errors.names.indexOf(key)]!;
  const quantities = (all: Float64Array) => {
    const radius_over_a = at(all, "spot.radius_over_a"), mixing = at(all, "spot.mixing");
    const spot = { ...model.spot, radius_over_a, mixing };
    const { vx_kms, vy_kms } = spotPlace({ ...model, spot }, binary);
    const own = at(all, "spot.equivalent_width_kms");
    return [vx_kms, vy_kms, own / (own + at(all, "disc.equivalent_width_kms"))];
  };
  const truth = quantities(values);
  // Of each quantity the gradient, its error, and what a unit of each whitened sample's noise does.
  const responses = names.map((_, q) => {
    const gradient = values.map((_, j) => {
      const step = 1e-3 * Math.sqrt(covariance[j * size + j]!);
      const there = values.map((value, k) => k === j ? value + step : value);
      return step > 0 ? (quantities(there)[q]! - truth[q]!) / step : 0;
    });
    const response = new Float64Array(line.length);
    let variance = 0;
    for (let b = 0; b < size; b++) {
      let factor = 0;
      for (let a = 0; a < size; a++) factor += gradient[a]! * covariance[a * size + b]!;
      variance += factor * gradient[b]!;
      derivatives[b]?.forEach((value, n) => response[n]! += factor * value);
    }
    return { response, error: Math.sqrt(variance) };
  });
  const pullsOf = (seed: number) => {
    const noise = problem.whitening.apply(dataOf(seed).flux.map((value, n) => value - line[n]!));
    return responses.map(({ response, error }) =>
      noise.reduce((sum, value, n) => sum + value * response[n]!, 0) / error
    );
  };
  const pulls = Array.from({ length: seeds }, (_, k) => pullsOf(k + 1));
  const off = names.map(() => 0);
  for (let seed = 1; seed <= FITS; seed++) {
    const { fitted } = compareHypotheses(prepare(seed), sets, { starts: 1 }).hypotheses[0]!;
    names.forEach((key, q) => {
      const pull = (fitted[key]! - truth[q]!) / responses[q]!.error;
      off[q] = Math.max(off[q]!, Math.abs(pull - pulls[seed - 1]![q]!));
    });
  }
  names.forEach((key, q) => {
    const own = pulls.map((all) => all[q]!);
    const mean = own.reduce((sum, z) => sum + z, 0) / seeds;
    const rms = Math.sqrt(own.reduce((sum, z) => sum + z * z, 0) / seeds);
    const inside = own.filter((z) => Math.abs(z) < 1).length / seeds;
    row(
      name,
      key,
      seeds,
      `${(100 * inside).toFixed(1)} ± ${(100 * Math.sqrt(0.683 * 0.317 / seeds)).toFixed(1)} %`,
      `${mean.toFixed(3)} ± ${(1 / Math.sqrt(seeds)).toFixed(3)}`,
      rms.toFixed(3),
      `${off[q]!.toFixed(3)} σ`,
    );
  });
}
