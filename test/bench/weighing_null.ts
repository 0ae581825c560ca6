/**
 * False-alarm rates where there is no spot: are they uniform, and what passes the 1 % point? Seeds 1 to N
 * (default 2000) of discs with fitted continua: round and quiet, then asymmetric and flickering. Each has
 * M trials (default 4) of its own. The rank of the data among them must be uniform; trials of all discs
 * together make the null table whose quantiles are tried. Adequacy is counted, too: every set is true.
 * Gains go to standard error, one row a set: its seed, its own, its trials'.
 *
 *     deno run --allow-read test/bench/weighing_null.ts [N] [M] [round|wild] [cheap|whole]
 */
import { kolmogorovSmirnov, randomStream } from "@millrace/millrace/numerics";
import { fitPair } from "@millrace/millrace/weighing";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { discModel, pairOf, row, trailOf } from "./weighing_data.ts";

const [seeds = 2000, trials = 4] = Deno.args.slice(0, 2).map(Number);
const kinds = Deno.args[2] === undefined ? ["round", "wild"] : [Deno.args[2]];
// Cheap: 24 exposures, pixels of a resolution element.
const size = Deno.args[3] === "whole" ? {} : { exposures: 24, pixel_kms: 60 };
const pair = { first: ["disc"], second: ["disc", "spot"] } as const;

row(
  "discs",
  "sets",
  "trials of each",
  "mean gain, data",
  "trials",
  "KS probability",
  "past 1 % point",
  "5 %",
  "10 %",
  "not adequate",
);
row(..."..........".split("").map(() => "---"));
for (const kind of kinds) {
  const wild = kind === "wild";
  const random = randomStream(1);
  const rates: number[] = [], data: number[] = [], table: number[] = [];
  const objections = new Map<string, number>();
  let inadequate = 0;
  const show = () => {
    const n = data.length;
    const sorted = [...table].sort((a, b) => b - a);
    const past = (share: number) => {
      const point = sorted[Math.max(0, Math.round(share * (sorted.length + 1)) - 1)]!;
      const count = data.filter((gain) => gain >= point).length;
      const error = Math.sqrt(share * (1 - share) * (1 / n + 1 / sorted.length));
      return `${(100 * count / n).toFixed(2)} ± ${(100 * error).toFixed(2)} %`;
    };
    const mean = (values: number[]) => {
      const middle = values.reduce((sum, value) => sum + value, 0) / values.length;
      const square = values.reduce((sum, value) => sum + (value - middle) ** 2, 0);
      return `${middle.toFixed(2)} ± ${(Math.sqrt(square) / values.length).toFixed(2)}`;
    };
    row(
      wild ? "asymmetric, flickering 6 %" : "round, quiet",
      n,
      trials,
      mean(data),
      mean(table),
      kolmogorovSmirnov(rates).probability.toFixed(3),
      past(0.01),
      past(0.05),
      past(0.1),
      `${inadequate} (${[...objections].map(([test, count]) => `${test} ${count}`).join(", ")})`,
    );
  };
  for (let seed = 1; seed <= seeds; seed++) {
    const options = { ...size, seed, flicker_rms: wild ? 0.06 : 0 };
    const { prepared, simple, job } = pairOf(trailOf(discModel(seed, wild), options), {
      ...pair,
      seed,
    });
    const { statistic } = fitPair(prepared.problem, job);
    const gains = runTrials(job, { from: 0, to: trials });
    // Ranks are whole numbers: a share of a rank, drawn, makes them uniform.
    const above = gains.filter((gain) => gain >= statistic).length;
    rates.push((above + random.uniform()) / (trials + 1));
    data.push(statistic);
    table.push(...gains);
    console.error([seed, statistic, ...gains].map((value) => +value.toFixed(4)).join(" "));
    if (!simple.adequate) inadequate++;
    for (const [test, { probability }] of Object.entries(simple.residual_tests)) {
      if (probability < 1e-3) objections.set(test, (objections.get(test) ?? 0) + 1);
    }
    if (seed % 100 === 0 && seed < seeds) show();
  }
  show();
}
