/**
 * Discs without a spot in which something else is wrong: is a spot claimed, and does adequacy object?
 * Seeds 1 to N (default 30); 24 exposures of the whole orbit, pixels of a resolution element. Then a
 * spot with 10 % of the light, with the whole orbit and without 30 % of it: errors and what they hold.
 *
 *     deno run --allow-read test/bench/weighing_unmodelled.ts [N] [part of a row's name]
 */
import { median } from "@millrace/millrace/numerics";
import { type Model, spotPlace, synthesize } from "@millrace/millrace/synthesis";
import {
  compareHypotheses,
  fitPair,
  noiseBank,
  nullKey,
  type NullTable,
  prepareProblem,
  type TrialJob,
  trialJob,
  type WeighableTrail,
  weighingData,
} from "@millrace/millrace/weighing";
import { judge } from "../../engine/weighing/judge.ts";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { verdictOf } from "../../engine/weighing/verdict.ts";
import { spotted } from "../weighing/made.ts";
import { binary, discModel, row, trailOf, WIDTH } from "./weighing_data.ts";

const count = Number(Deno.args[0] ?? 30);
const chosen = Deno.args[1] ?? "";
const TRIALS = 100;
const sets = [["disc"], ["disc", "spot"]] as const;
const whole = { exposures: 24, pixel_kms: 60 };
// The same cadence.
const gap = { exposures: 17, pixel_kms: 60, phases: [0.05, 0.75] } as const;
const thick: Model = {
  parts: ["disc"],
  disc: { equivalent_width_kms: WIDTH, optical_depth: "thick" },
};

/** A round disc's trail with a share of the same line shifted, as a neighbour or a blend. */
function withLine(seed: number, shift_kms: number, share: number): WeighableTrail {
  const trail = trailOf(spotted(0), { ...whole, seed });
  const { sampling } = trail;
  const velocity_kms = sampling.velocity_kms.map((v) => v - shift_kms);
  const other = synthesize(spotted(0), { binary, sampling: { ...sampling, velocity_kms } });
  return { ...trail, flux: trail.flux.map((value, n) => value + share * other[n]!) };
}

const cases: readonly (readonly [name: string, trail: (seed: number) => WeighableTrail])[] = [
  ["thick disc", (seed) => trailOf(thick, { ...whole, seed })],
  ...[0.01, 0.08].map((share) =>
    [
      `neighbour at 1500 km/s, ${100 * share} %`,
      (seed: number) => withLine(seed, 1500, share),
    ] as const
  ),
  ...[0.01, 0.05].map((share) =>
    [`blend at −350 km/s, ${100 * share} %`, (seed: number) => withLine(seed, -350, share)] as const
  ),
  ["30 % of the orbit missing, round", (seed) => trailOf(spotted(0), { ...gap, seed })],
  [
    "30 % of the orbit missing, asymmetric, flickering 6 %",
    (seed) => trailOf(discModel(seed, true), { ...gap, seed, flicker_rms: 0.06 }),
  ],
];

/** Trials up to the first that gains as much, which decides; what follows it is not run. */
function tableOf(job: TrialJob, observed: number): NullTable {
  const statistics = new Float64Array(TRIALS).fill(Infinity);
  for (let k = 0; k < TRIALS; k++) {
    statistics[k] = runTrials(job, { from: k, to: k + 1 })[0]!;
    if (statistics[k]! >= observed) break;
  }
  return { key: nullKey(job), first: 0, statistics };
}

/**
 * Whether the spot is needed by its trials, what the verdict prefers, and which tests object. Where
 * they object to both sets there are no trials: nothing is claimed, whatever they say.
 */
async function weighed(trail: WeighableTrail, seed: number) {
  const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
  const { problem, richest, line_scale } = prepared;
  const comparison = compareHypotheses(prepared, sets, { starts: 1 });
  const bank = noiseBank(problem, richest, { line_scale });
  const simple = comparison.hypotheses.find(({ parts }) => parts.length === 1)!;
  const own = bank.structured ? noiseBank(problem, simple.fit, { line_scale }) : bank;
  const objecting = Object.entries(simple.residual_tests)
    .filter(([, { probability }]) => probability < 1e-3).map(([test]) => test);
  if (!comparison.hypotheses.some(({ adequate }) => adequate)) {
    return { needed: false, claimed: false, adequate: false, objecting };
  }
  const job = trialJob(problem, { fit: simple.fit, second: sets[1], bank: own, seed });
  const judgement = await judge(comparison, {
    problem,
    bankFor: () => own,
    trials: TRIALS,
    seed,
    tables: [tableOf(job, fitPair(problem, job).statistic)],
    workers: 1,
  });
  return {
    needed: judgement.part_tests[0]!.needed,
    claimed: verdictOf(judgement).preferred.includes("spot"),
    adequate: judgement.best.adequate,
    objecting,
  };
}

row(
  "discs without a spot",
  "sets",
  "not adequate",
  "spot needed by trials",
  "spot claimed",
  "tests",
);
row("---", "---", "---", "---", "---", "---");
for (const [name, trail] of cases) {
  if (!name.includes(chosen)) continue;
  let inadequate = 0, needed = 0, claimed = 0;
  const objections = new Map<string, number>();
  for (let seed = 1; seed <= count; seed++) {
    const found = await weighed(trail(seed), seed);
    if (!found.adequate) inadequate++;
    if (found.needed) needed++;
    if (found.claimed) claimed++;
    for (const test of found.objecting) objections.set(test, (objections.get(test) ?? 0) + 1);
  }
  const tests = [...objections].map(([test, times]) => `${test} ${times}`).join(", ");
  row(name, count, inadequate, needed, claimed, tests);
}

const model = spotted(0.1);
const place = spotPlace(model, binary);
const truth: Record<string, number> = {
  "spot.vx_kms": place.vx_kms,
  "spot.vy_kms": place.vy_kms,
  "spot.flux_fraction": 0.1,
};
const medians = new Map<string, number>();
console.log();
row("a spot of 10 %", "quantity", "sets", "median error", "of the whole orbit's", "within 1 σ");
row("---", "---", "---", "---", "---", "---");
for (const [name, size] of [["whole orbit", whole], ["30 % missing", gap]] as const) {
  if (!name.includes(chosen)) continue;
  const errors = new Map<string, number[]>();
  const inside = new Map<string, number>();
  for (let seed = 1; seed <= count; seed++) {
    const data = weighingData(trailOf(model, { ...size, seed }));
    const prepared = prepareProblem(data, { binary }, { sets: [sets[1]] });
    const one = compareHypotheses(prepared, [sets[1]], { starts: 1 }).hypotheses[0]!;
    for (const [key, value] of Object.entries(truth)) {
      const error = one.errors[key] ?? NaN;
      errors.set(key, [...errors.get(key) ?? [], error]);
      const holds = Math.abs(one.fitted[key]! - value) < error;
      inside.set(key, (inside.get(key) ?? 0) + (holds ? 1 : 0));
    }
  }
  for (const [key, values] of errors) {
    const middle = median(values);
    if (size === whole) medians.set(key, middle);
    const ratio = (middle / (medians.get(key) ?? NaN)).toFixed(2);
    const share = `${(100 * inside.get(key)! / count).toFixed(0)} %`;
    row(name, key, count, middle.toPrecision(3), ratio, share);
  }
}
