// Largest resident memory of one maximum-entropy solve in a process of its own, megabytes:
//   deno run --allow-all test/bench/solve_memory.ts medium|large
import { maximumEntropy } from "@millrace/millrace/tomography";
import { benchProblem } from "../tomography/bench_problem.ts";
import { SIZES } from "../tomography/samplings.ts";

const size = Object.keys(SIZES).find((name) => name === Deno.args[0]) as keyof typeof SIZES;
const { trail, shape } = benchProblem(size, { signal_to_noise: 30 });
const { converged } = maximumEntropy(trail, shape);
// VmHWM: the peak, as Linux keeps it.
const [, kilobytes] = /VmHWM:\s*(\d+)/.exec(Deno.readTextFileSync("/proc/self/status")) ?? [];
console.log(JSON.stringify({ size, converged, megabytes: Number(kilobytes) / 1024 }));
