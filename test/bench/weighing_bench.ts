// Fits of 64 × 220 samples, and a whole weighing: `deno bench --allow-read test/bench/weighing_bench.ts`.
// The goals are 0.8 s for disc + spot from nothing, 0.3 s for one from a fit of the same kind of data.
import { spotted } from "../weighing/made.ts";
import { fitHypothesis, makeProblem, weighingData, weighTrail } from "@millrace/millrace/weighing";
import { valuesOf } from "../../engine/weighing/fit_hypothesis.ts";
import { withFlux } from "../../engine/weighing/problem.ts";
import { binary, trailOf } from "./weighing_data.ts";

const size = { exposures: 64, pixel_kms: 22.8, reach_kms: 2500 };
const hypothesis = ["disc", "spot"] as const;
const data = weighingData(trailOf(spotted(0.1), { ...size, seed: 1 }));
const other = weighingData(trailOf(spotted(0.1), { ...size, seed: 2 }));
const problem = makeProblem(data, { binary });
const warm = valuesOf(fitHypothesis(problem, { hypothesis }));

Deno.bench(`disc + spot from nothing, ${data.flux.length} samples`, { n: 5, warmup: 1 }, () => {
  fitHypothesis(makeProblem(data, { binary }), { hypothesis, starts: 2 });
});

Deno.bench(`disc + spot, warm, ${data.flux.length} samples`, { n: 10, warmup: 1 }, () => {
  fitHypothesis(withFlux(problem, other.flux), { hypothesis, warm });
});

for (const workers of [1, 2]) {
  Deno.bench(`default sets, 200 trials, workers: ${workers}`, { n: 1, warmup: 0 }, async () => {
    const trail = trailOf(spotted(0.1), { ...size, seed: 3, flicker_rms: 0.05 });
    await weighTrail(trail, { binary, workers, errors: { phase: 0.002, systemic_kms: 3 } });
  });
}
