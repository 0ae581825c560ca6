// Filtered back-projection on the geometry of peers.py: `deno task bench`.
import { backProject } from "@millrace/millrace/tomography";
import { benchProblem } from "../tomography/bench_problem.ts";
import { plainGrid, SIZES } from "../tomography/samplings.ts";

for (const size of Object.keys(SIZES) as (keyof typeof SIZES)[]) {
  const { trail, shape } = benchProblem(size, { signal_to_noise: 30 });
  const grid = plainGrid(trail.sampling, trail.flux, trail.error);
  Deno.bench({
    name: `back-projection, ${size}`,
    group: "back-projection",
    fn: () => {
      backProject({ grid }, shape);
    },
  });
}
