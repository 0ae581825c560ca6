// Every row of the inversion goals beside its peer (peers.py), interleaved, as a Markdown table:
//   deno run --allow-read --allow-write --allow-run --allow-env --allow-sys test/bench/entropy_goals.ts
// Options: --rounds N (3), --replicas N (1000), --skip large,projector,iradon,solve,calls,memory,replicas
import {
  backProject,
  makeProjector,
  maximumEntropy,
  resampleMaps,
} from "@millrace/millrace/tomography";
import { benchProblem } from "../tomography/bench_problem.ts";
import { plainGrid } from "../tomography/samplings.ts";
import { classicEntropy } from "./classic_entropy.ts";

const PEERS = new URL("peers.py", import.meta.url).pathname;
const option = (name: string, otherwise: string) => {
  const at = Deno.args.indexOf(`--${name}`);
  return at < 0 ? otherwise : Deno.args[at + 1] ?? otherwise;
};
const ROUNDS = Number(option("rounds", "3"));
const REPLICAS = Number(option("replicas", "1000"));
const SKIP = option("skip", "").split(",");

type Size = "small" | "medium" | "large";

interface PeerLine {
  readonly peer: string;
  readonly ms: number;
  readonly converged?: boolean;
}

async function peer(...args: string[]): Promise<PeerLine[]> {
  const { stdout, success } = await new Deno.Command("/usr/bin/python3", {
    args: [PEERS, ...args],
    env: { OMP_NUM_THREADS: "1" },
    stderr: "inherit",
  }).output();
  if (!success) throw new Error(`peers.py ${args.join(" ")} failed`);
  return new TextDecoder().decode(stdout).trim().split("\n").map((line) => JSON.parse(line));
}

/** Minimum over one second of calls, as peers.py does it. */
function bestMs(run: () => void, seconds = 1): number {
  run();
  let best = Infinity;
  const end = performance.now() + 1000 * seconds;
  for (let calls = 0; performance.now() < end || calls < 3; calls++) {
    const start = performance.now();
    run();
    best = Math.min(best, performance.now() - start);
  }
  return best;
}

const table: string[][] = [];
function row(what: string, ours: number, theirs: number, must: number, reach: number): void {
  const ratio = ours / theirs;
  const verdict = ratio <= reach ? "reached" : ratio <= must ? "met" : "missed";
  const ms = (x: number) => x < 100 ? x.toFixed(2) : x.toFixed(0);
  table.push([what, ms(ours), ms(theirs), ratio.toFixed(3), `${must}`, `${reach}`, verdict]);
  console.error(table[table.length - 1]!.join(" | "));
}

async function projectors(size: Size): Promise<void> {
  const { trail, shape, truth } = benchProblem(size, { signal_to_noise: 30 });
  const projector = makeProjector(trail.sampling, shape);
  const data = new Float64Array(projector.sample_count);
  const image = new Float64Array(projector.image_size);
  let ours = Infinity, csr = Infinity, factored = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    ours = Math.min(
      ours,
      bestMs(() => projector.forward(truth, data), 0.5) +
        bestMs(() => projector.adjoint(data, image), 0.5),
    );
    const which = size === "large" ? "factored" : "csr,factored";
    for (const line of await peer("projector", size, which)) {
      if (line.peer === "scipy CSR") csr = Math.min(csr, line.ms);
      else factored = Math.min(factored, line.ms);
    }
  }
  const what = `forward + adjoint, ${size}`;
  if (size === "small") row(`${what} / scipy CSR`, ours, csr, 0.16, 0.1);
  if (size === "medium") {
    row(`${what} / scipy CSR`, ours, csr, 0.08, 0.045);
    row(`${what} / factored CSR`, ours, factored, 0.3, 0.15);
  }
  if (size === "large") row(`${what} / factored CSR`, ours, factored, 0.18, 0.1);
}

async function backProjection(): Promise<void> {
  const { trail, shape } = benchProblem("medium", { signal_to_noise: 30 });
  const grid = plainGrid(trail.sampling, trail.flux, trail.error);
  let ours = Infinity, theirs = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    ours = Math.min(
      ours,
      bestMs(() => void backProject({ grid }, { ...shape, precision: "single" })),
    );
    for (const line of await peer("iradon", "medium")) theirs = Math.min(theirs, line.ms);
  }
  row("back-projection, medium / iradon", ours, theirs, 0.08, 0.05);
}

async function solve(): Promise<void> {
  const { trail, shape, noise } = benchProblem("medium", { signal_to_noise: 30 });
  const options = { ...shape, prior: { kind: "uniform" } } as const;
  const found = maximumEntropy(trail, options);
  const { sampling } = trail;
  const bins = sampling.start[1]!, step_kms = sampling.velocity_kms[1]! - sampling.velocity_kms[0]!;
  // The peer's map is per bin, ours per km/s and (km/s)².
  const unit = (2 * shape.half_width_kms / (shape.pixels - 1)) ** 2 / step_kms;
  const problem = await Deno.makeTempFile({ suffix: ".json" });
  await Deno.writeTextFile(
    problem,
    JSON.stringify({
      pixels: shape.pixels,
      phases: [...sampling.phase],
      bins,
      half_width_kms: shape.half_width_kms,
      first_kms: sampling.velocity_kms[0],
      step_kms,
      sigma_kms: sampling.profile_sigma_kms[0],
      gamma_kms: shape.systemic_kms,
      data: [...trail.flux],
      noise,
      level: found.level * unit,
      alpha: found.multiplier / unit,
    }),
  );
  let ours = Infinity, theirs = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    ours = Math.min(ours, bestMs(() => void maximumEntropy(trail, options)));
    for (const line of await peer("solve", problem)) {
      if (line.converged === true) theirs = Math.min(theirs, line.ms);
    }
  }
  await Deno.remove(problem);
  row("entropy solve, medium, S/N 30, uniform / scipy L-BFGS-B + CSR", ours, theirs, 0.05, 0.02);
}

function calls(): void {
  for (
    const [signal_to_noise, kind, must, reach] of [
      [30, "uniform", 30, 20],
      [30, "blurred", 50, 35],
      [100, "uniform", 80, 60],
      [100, "blurred", 80, 60],
    ] as const
  ) {
    let most = 0;
    for (let seed = 1; seed <= 6; seed++) {
      const { trail, shape } = benchProblem("medium", { signal_to_noise, seed });
      const prior = kind === "uniform" ? { kind } : { kind, fwhm_kms: 60 };
      most = Math.max(most, maximumEntropy(trail, { ...shape, prior }).operator_calls);
    }
    const verdict = most <= reach ? "reached" : most <= must ? "met" : "missed";
    const what = `operator calls, medium, S/N ${signal_to_noise}, ${kind}, most of 6 seeds`;
    table.push([what, `${most}`, "", "", `${must}`, `${reach}`, verdict]);
    console.error(table[table.length - 1]!.join(" | "));
  }
}

async function replicas(): Promise<void> {
  const { trail, shape } = benchProblem("medium", { signal_to_noise: 30 });
  const prior = { kind: "uniform" } as const;
  const found = maximumEntropy(trail, { ...shape, prior });
  const recipe = {
    inversion: "entropy",
    ...shape,
    prior,
    multiplier: found.multiplier,
    start: found.map,
    precision: "single",
    force: true,
  } as const;
  const time = async (workers: number) => {
    const start = performance.now();
    await resampleMaps(trail, { recipe, count: REPLICAS, seed: 1, kind: "bootstrap", workers });
    return performance.now() - start;
  };
  const projector = makeProjector(trail.sampling, shape);
  let one = Infinity, two = Infinity, classic = Infinity;
  for (let round = 0; round < ROUNDS; round++) {
    classic = Math.min(
      classic,
      bestMs(() => void classicEntropy(projector, trail, found.level), 2),
    );
    one = Math.min(one, await time(1));
    two = Math.min(two, await time(2));
  }
  row(`${REPLICAS} replicas: two workers / one`, two, one, 0.6, 0.52);
  row(
    `${REPLICAS} replicas on two cores / (${REPLICAS} × one cold classic solve on one)`,
    two,
    REPLICAS * classic,
    0.25,
    0.1,
  );
}

async function memory(): Promise<void> {
  const script = new URL("solve_memory.ts", import.meta.url).pathname;
  for (const [size, must] of [["medium", 200], ["large", 600]] as const) {
    if (SKIP.includes(size)) continue;
    const { stdout, success } = await new Deno.Command(Deno.execPath(), {
      args: ["run", "--no-prompt", "--allow-all", script, size],
      stderr: "inherit",
    }).output();
    if (!success) throw new Error(`solve_memory.ts ${size} failed`);
    const { megabytes } = JSON.parse(new TextDecoder().decode(stdout)) as { megabytes: number };
    const verdict = megabytes <= must ? "met" : "missed";
    const what = `largest resident memory of a ${size} solve, MB`;
    table.push([what, megabytes.toFixed(0), "", "", `${must}`, "", verdict]);
    console.error(table[table.length - 1]!.join(" | "));
  }
}

if (!SKIP.includes("projector")) {
  for (const size of ["small", "medium", "large"] as const) {
    if (!SKIP.includes(size)) await projectors(size);
  }
}
if (!SKIP.includes("iradon")) await backProjection();
if (!SKIP.includes("solve")) await solve();
if (!SKIP.includes("calls")) calls();
if (!SKIP.includes("memory")) await memory();
if (!SKIP.includes("replicas")) await replicas();

console.log("| what | ours, ms | peer, ms | ratio | must | reach for | |");
console.log("| --- | --- | --- | --- | --- | --- | --- |");
for (const cells of table) console.log(`| ${cells.join(" | ")} |`);
