/**
 * False-alarm rates where there is no spot: are they uniform? Seeds 1 to N (default 100) of round, quiet
 * discs and of asymmetric, flickering ones, each with M trials (default 49) of its own.
 *
 *     deno run --allow-read test/bench/weighing_null.ts [N] [M]
 */
import { kolmogorovSmirnov } from "@millrace/millrace/numerics";
import { fitPair } from "@millrace/millrace/weighing";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { discModel, pairOf, row, trailOf } from "./weighing_data.ts";

const [seeds = 100, trials = 49] = Deno.args.map(Number);

row("discs", "sets", "trials", "KS distance", "KS probability", "≤ 0.05", "≤ 0.10", "≤ 0.50");
row(..."---------".split("").slice(0, 8).map(() => "---"));
for (const wild of [false, true]) {
  const rates: number[] = [];
  for (let seed = 1; seed <= seeds; seed++) {
    const trail = trailOf(discModel(seed, wild), { seed, flicker_rms: wild ? 0.06 : 0 });
    const { prepared, job } = pairOf(trail, { first: ["disc"], second: ["disc", "spot"], seed });
    const { statistic } = fitPair(prepared.problem, job);
    const gains = runTrials(job, { from: 0, to: trials });
    rates.push((gains.filter((gain) => gain >= statistic).length + 1) / (trials + 1));
  }
  const { distance, probability } = kolmogorovSmirnov(rates);
  const below = (limit: number) => rates.filter((rate) => rate <= limit).length / seeds;
  row(
    wild ? "asymmetric, flickering 6 %" : "round, quiet",
    seeds,
    trials,
    distance.toFixed(3),
    probability.toFixed(3),
    below(0.05).toFixed(3),
    below(0.1).toFixed(3),
    below(0.5).toFixed(3),
  );
}
