// Twenty replicas of a maximum-entropy map on one worker: `deno task bench`.
import { maximumEntropy, resampleMaps } from "@millrace/millrace/tomography";
import { benchProblem } from "../tomography/bench_problem.ts";

const { trail, shape } = benchProblem("medium", { signal_to_noise: 30 });
const prior = { kind: "uniform" } as const;
const found = maximumEntropy(trail, { ...shape, prior });
for (const kind of ["noise", "bootstrap"] as const) {
  Deno.bench({
    name: `20 replicas by ${kind}, medium`,
    group: "replicas",
    fn: async () => {
      await resampleMaps(trail, {
        recipe: {
          inversion: "entropy",
          ...shape,
          prior,
          multiplier: found.multiplier,
          start: found.map,
          precision: "single",
          force: true,
        },
        count: 20,
        seed: 1,
        kind,
      });
    },
  });
}
