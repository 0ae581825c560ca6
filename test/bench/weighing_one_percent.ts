/**
 * The 1 % point: how often data without a spot pass the threshold that a shared null table sets. The
 * table has M trials (default 1000) made from one set of data; N other sets (default 2000) of the same
 * kind, seeds 1 to N, are weighed against it.
 *
 *     deno run --allow-read test/bench/weighing_one_percent.ts [N] [M]
 */
import { fitPair } from "@millrace/millrace/weighing";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { discModel, pairOf, row, trailOf } from "./weighing_data.ts";

const [seeds = 2000, trials = 1000] = Deno.args.map(Number);
const pair = { first: ["disc"], second: ["disc", "spot"] } as const;
// Cheap data: 40 exposures, pixels of half a resolution element's width and more.
const cheap = { exposures: 40, pixel_kms: 50 };

row("discs", "sets", "trials", "past the 1 % point", "its error", "past 5 %", "past 10 %");
row("---", "---", "---", "---", "---", "---", "---");
for (const wild of [false, true]) {
  const options = { ...cheap, flicker_rms: wild ? 0.06 : 0 };
  const model = discModel(1, wild);
  const { job } = pairOf(trailOf(model, { ...options, seed: 1_000_000 }), { ...pair, seed: 1 });
  const table = runTrials(job, { from: 0, to: trials });
  const rates: number[] = [];
  for (let seed = 1; seed <= seeds; seed++) {
    const { prepared, job: own } = pairOf(trailOf(model, { ...options, seed }), { ...pair, seed });
    const { statistic } = fitPair(prepared.problem, own);
    rates.push((table.filter((gain) => gain >= statistic).length + 1) / (trials + 1));
  }
  const below = (limit: number) => rates.filter((rate) => rate <= limit).length / seeds;
  const one = below(0.01);
  row(
    wild ? "asymmetric, flickering 6 %" : "round, quiet",
    seeds,
    trials,
    `${(100 * one).toFixed(2)} %`,
    `${(100 * Math.sqrt(0.01 * 0.99 * (1 / seeds + 1 / trials))).toFixed(2)} %`,
    `${(100 * below(0.05)).toFixed(2)} %`,
    `${(100 * below(0.1)).toFixed(2)} %`,
  );
}
