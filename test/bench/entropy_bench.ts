// Maximum entropy and total variation from back-projection to the end: `deno task bench`.
import { maximumEntropy, totalVariation } from "@millrace/millrace/tomography";
import { benchProblem } from "../tomography/bench_problem.ts";

for (const signal_to_noise of [30, 100]) {
  const { trail, shape } = benchProblem("medium", { signal_to_noise });
  const group = `inversion, medium, S/N ${signal_to_noise}`;
  Deno.bench({
    name: `entropy, uniform, S/N ${signal_to_noise}`,
    group,
    fn: () => void maximumEntropy(trail, { ...shape, prior: { kind: "uniform" } }),
  });
  Deno.bench({
    name: `entropy, blurred, S/N ${signal_to_noise}`,
    group,
    fn: () => void maximumEntropy(trail, shape),
  });
  Deno.bench({
    name: `total variation, S/N ${signal_to_noise}`,
    group,
    fn: () => void totalVariation(trail, shape),
  });
}
