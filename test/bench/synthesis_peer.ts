// The disc of the forward model beside plain numpy, in one run, rounds interleaved:
//   deno run -A test/bench/synthesis_peer.ts
// Goal: at least 5 times as fast as the straightforward version ("elements").
import { binaryFrom, keplerianSpeed } from "@millrace/millrace/binary";
import { synthesize } from "@millrace/millrace/synthesis";
import type { Sampling } from "@millrace/millrace/trail";

const rows = 64, columns = 220, rounds = 3;
const phases = Array.from({ length: rows }, (_, i) => (1.3 * i / rows) % 1);
const problem = {
  phases,
  width: 0.018,
  columns,
  first_kms: -2200,
  step_kms: 20,
  sigma_kms: 40,
  k_accretor_kms: 70,
  inner_over_outer: 0.05 / 0.3,
  beta: 1.5,
  equivalent_width_kms: 3000,
};
const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
const sampling: Sampling = {
  count: rows,
  phase: Float64Array.from(phases),
  cycle: new Float64Array(rows),
  phase_width: new Float64Array(rows).fill(problem.width),
  start: Uint32Array.from({ length: rows + 1 }, (_, i) => i * columns),
  velocity_kms: Float64Array.from(
    { length: rows * columns },
    (_, n) => problem.first_kms + problem.step_kms * (n % columns),
  ),
  pixel_kms: new Float64Array(rows * columns).fill(problem.step_kms),
  profile_sigma_kms: new Float64Array(rows).fill(problem.sigma_kms),
};

function bestMs(call: () => void): number {
  call();
  let best = Infinity;
  const start = performance.now();
  while (performance.now() - start < 1000) {
    const t = performance.now();
    call();
    best = Math.min(best, performance.now() - t);
  }
  return best;
}

function runPeers(file: string): { peer: string; ms: number; samples: number[] }[] {
  const python = new Deno.Command("/usr/bin/python3", {
    args: [new URL("synthesis_peer.py", import.meta.url).pathname, file],
    env: { OMP_NUM_THREADS: "1", OPENBLAS_NUM_THREADS: "1" },
  });
  const { code, stdout, stderr } = python.outputSync();
  if (code !== 0) throw new Error(new TextDecoder().decode(stderr));
  return new TextDecoder().decode(stdout).trim().split("\n").map((line) => JSON.parse(line));
}

const file = Deno.makeTempFileSync({ suffix: ".json" });
Deno.writeTextFileSync(file, JSON.stringify({ ...problem, rim_kms: keplerianSpeed(0.3, binary) }));
const disc = () => synthesize({ parts: ["disc"] }, { binary, sampling });
const trail = disc();
const peak = Math.max(...trail);
const best = new Map<string, number>();
const keep = (name: string, ms: number) => best.set(name, Math.min(ms, best.get(name) ?? Infinity));
for (let round = 0; round < rounds; round++) {
  keep("millrace", bestMs(disc));
  for (const { peer, ms, samples } of runPeers(file)) {
    keep(peer, ms);
    const worst = samples.reduce((max, s, n) => Math.max(max, Math.abs(s - trail[n]!)), 0);
    if (round === 0) {
      console.log(`${peer}: differs by ${(worst / peak).toExponential(1)} of the peak`);
    }
  }
}
Deno.removeSync(file);
const ours = best.get("millrace")!;
for (const [name, ms] of best) {
  console.log(`${name}: ${ms.toFixed(3)} ms, ${(ms / ours).toFixed(1)} times ours`);
}
