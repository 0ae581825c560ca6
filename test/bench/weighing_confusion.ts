/**
 * Stream against spot: what weighings of N sets (default 10) of each kind of data say, "undecided"
 * allowed. Spots have velocities between the stream's (mixing 0) and the disc's (1); each part has 4 %
 * or 1 % of the light. Kind k has seeds 1000 k + 1 to 1000 k + N, or one kind's luck would be every
 * kind's; 24 exposures, pixels of a resolution element. To be cheap, sets share their tables of 100
 * trials: those of a disc at one S/N, those of spot and stream of one kind, which are made only where
 * residual tests leave both open in some set.
 *
 *     deno run --allow-read test/bench/weighing_confusion.ts [N] [part of a row's name]
 */
import type { Model } from "@millrace/millrace/synthesis";
import {
  compareHypotheses,
  type Hypothesis,
  type HypothesisFit,
  noiseBank,
  nullKey,
  prepareProblem,
  trialJob,
  type Verdict,
  weighingData,
} from "@millrace/millrace/weighing";
import { judge } from "../../engine/weighing/judge.ts";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { verdictOf } from "../../engine/weighing/verdict.ts";
import { binary, row, trailOf, WIDTH } from "./weighing_data.ts";

const count = Number(Deno.args[0] ?? 10);
const chosen = Deno.args[1] ?? "";
const TRIALS = 100;
const sets: readonly Hypothesis[] = [["disc"], ["disc", "spot"], ["disc", "stream"]];

interface Truth {
  readonly name: string;
  readonly part: "spot" | "stream";
  readonly model: Model;
}

function truths(share: number): Truth[] {
  const disc = { equivalent_width_kms: (1 - share) * WIDTH };
  const own = { equivalent_width_kms: share * WIDTH };
  const spot = (mixing: number): Truth => ({
    name: `spot, mixing ${mixing}`,
    part: "spot",
    model: { parts: ["disc", "spot"], disc, spot: { ...own, mixing, sigma_kms: 60 } },
  });
  const stream = (brightness_index: number): Truth => ({
    name: `stream, index ${brightness_index}`,
    part: "stream",
    model: { parts: ["disc", "stream"], disc, stream: { ...own, brightness_index } },
  });
  return [...[0, 0.5, 1].map(spot), ...[0, 3].map(stream)];
}

/** One set, fitted, with the pairs whose trials a judgement may ask for. */
function fitted(
  model: Model,
  options: { readonly seed: number; readonly signal_to_noise: number },
) {
  const { seed } = options;
  const size = { flicker_rms: 0.05, exposures: 24, pixel_kms: 60 };
  const trail = trailOf(model, { ...options, ...size });
  const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
  const { problem, richest, line_scale } = prepared;
  const comparison = compareHypotheses(prepared, sets, { starts: 1 });
  const bank = noiseBank(problem, richest, { line_scale });
  const bankFor = (fit: HypothesisFit) =>
    bank.structured ? noiseBank(problem, fit, { line_scale }) : bank;
  const of = (parts: Hypothesis) =>
    comparison.hypotheses.find((one) => one.parts.join() === parts.join())!.fit;
  const [disc, spot, stream] = sets as [Hypothesis, Hypothesis, Hypothesis];
  const jobs = ([[disc, spot], [disc, stream], [spot, stream], [stream, spot]] as const).map((
    [first, second],
  ) => trialJob(problem, { fit: of(first), second, bank: bankFor(of(first)), seed }));
  return { problem, comparison, bankFor, jobs, seed };
}

/** The verdict, with gains of trials that the sets of a kind share. */
async function verdict(set: ReturnType<typeof fitted>, gains: readonly number[][]) {
  const { comparison, jobs, ...rest } = set;
  const tables = gains.map((statistics, i) => ({
    key: nullKey(jobs[i]!),
    first: 0,
    statistics: Float64Array.from(statistics),
  }));
  return verdictOf(await judge(comparison, { ...rest, trials: TRIALS, tables, workers: 1 }));
}

function outcome({ preferred, undecided_with }: Verdict, part: Truth["part"]): string {
  if (preferred.length === 0) return "outside";
  if (preferred.length === 1) return "nothing found";
  if (undecided_with !== null) return "undecided";
  return preferred.includes(part) ? "right" : "wrong";
}

const OUTCOMES = ["right", "undecided", "nothing found", "outside", "wrong"];
const all = new Map<string, number>();
let kinds = 0;
row("S/N", "share of light", "truth", "sets", ...OUTCOMES);
row(..."---------".split("").map(() => "---"));
for (const signal_to_noise of [25, 8]) {
  // A disc's trials know nothing of what else is in the data.
  let ofDisc: number[][] | undefined;
  for (const share of [0.04, 0.01]) {
    for (const { name, part, model } of truths(share)) {
      const before = 1000 * ++kinds;
      const title = `S/N ${signal_to_noise}, ${100 * share} %, ${name}`;
      if (!title.includes(chosen)) continue;
      const seeds = Array.from({ length: count }, (_, k) => before + k + 1);
      const made = seeds.map((seed) => fitted(model, { seed, signal_to_noise }));
      const makers = made.slice(0, 5);
      const each = Math.ceil(TRIALS / makers.length);
      const tableOf = (i: number) =>
        makers.flatMap(({ jobs }) => [...runTrials(jobs[i]!, { from: 0, to: each })])
          .slice(0, TRIALS);
      ofDisc ??= [0, 1].map(tableOf);
      const open = made.some(({ comparison: { hypotheses } }) =>
        hypotheses.every(({ parts, adequate }) => adequate || parts.length === 1)
      );
      const gains = [...ofDisc, ...open ? [2, 3].map(tableOf) : []];
      const counts = new Map<string, number>();
      for (const set of made) {
        const found = outcome(await verdict(set, gains), part);
        counts.set(found, (counts.get(found) ?? 0) + 1);
        all.set(found, (all.get(found) ?? 0) + 1);
      }
      const numbers = OUTCOMES.map((key) => counts.get(key) ?? 0);
      row(signal_to_noise, `${100 * share} %`, name, count, ...numbers);
    }
  }
}
const total = [...all.values()].reduce((a, b) => a + b, 0);
const wrong = all.get("wrong") ?? 0;
// Rule of three, for none; else the normal bound will do.
const bound = wrong === 0
  ? 1 - 0.05 ** (1 / total)
  : wrong / total + 1.645 * Math.sqrt(wrong) / total;
console.log(
  `\nwrong: ${wrong} of ${total}; below ${(100 * bound).toFixed(1)} % at 95 % confidence`,
);
