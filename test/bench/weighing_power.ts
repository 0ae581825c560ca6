/**
 * The share of the light that a spot needs to be found with 95 % power at a false-alarm rate of 1 %,
 * by whole weighings of N sets (default 40) at each of several shares, beside what the detection limit
 * says for the spot's place at the same threshold.
 *
 *     deno run --allow-read test/bench/weighing_power.ts [N]
 */
import { minimise, normalQuantile, normalTail } from "@millrace/millrace/numerics";
import { spotPlace } from "@millrace/millrace/synthesis";
import { detectionLimit, fitPair } from "@millrace/millrace/weighing";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { spotted } from "../weighing/made.ts";
import { binary, pairOf, row, trailOf } from "./weighing_data.ts";

const sets = Number(Deno.args[0] ?? 40);
const TRIALS = 200;
const CELLS = 15;
const pair = { first: ["disc"], second: ["disc", "spot"] } as const;
const { vx_kms, vy_kms } = spotPlace(spotted(0.1), binary);
const reach = Math.max(Math.abs(vx_kms), Math.abs(vy_kms));

row("data", "gain of the 1 % point", "found with 95 % power", "with 50 %", "limit for 95 %");
row("---", "---", "---", "---", "---");
for (const signal_to_noise of [25, 8]) {
  for (const flicker_rms of [0, 0.06]) {
    const options = { signal_to_noise, flicker_rms };
    const none = pairOf(trailOf(spotted(0), { ...options, seed: 999_999 }), { ...pair, seed: 1 });
    const gains = runTrials(none.job, { from: 0, to: TRIALS }).sort();
    const threshold = gains[Math.floor(0.99 * (TRIALS + 1)) - 1]!;
    const { problem } = none.prepared;
    const { fit, fit_errors } = none.simple;
    const { limit } = detectionLimit(problem, {
      fit,
      fit_errors,
      bank: none.bank,
      threshold,
      refit: true,
      trials: TRIALS,
      sigma_kms: 60,
      // Fine enough that the place nearest to the spot's stands for it.
      grid: { cells: CELLS, half_width_kms: reach },
    });
    const step = 2 * reach / (CELLS - 1);
    const index = (v: number) => Math.round((v + reach) / step);
    const cell = index(vy_kms) * CELLS + index(vx_kms);
    const guess = limit.fraction_95[cell]!;

    const shares = [0.5, 0.75, 1, 1.25].map((factor) => factor * guess);
    const found = shares.map((share, s) => {
      let count = 0;
      for (let k = 1; k <= sets; k++) {
        const seed = 1000 * (s + 1) + k;
        const { prepared, job } = pairOf(trailOf(spotted(share), { ...options, seed }), {
          ...pair,
          seed,
        });
        if (fitPair(prepared.problem, job).statistic >= threshold) count++;
      }
      return count;
    });
    // Probit of the share found, by weighted least squares on the counts.
    const power = minimise(
      ([middle, width]) =>
        Float64Array.from(shares, (share, s) => {
          const p = 1 - normalTail((share - middle!) / width!);
          return (found[s]! - sets * p) / Math.sqrt(sets * Math.max(0.02, p * (1 - p)));
        }),
      Float64Array.of(0.6 * guess, 0.25 * guess),
      { lower: [0, 0.02 * guess], upper: [2 * guess, 2 * guess] },
    );
    const [middle, width] = power.parameters as unknown as [number, number];
    const z = normalQuantile(0.95);
    const f95 = middle + z * width;
    const { covariance } = power;
    const error = Math.sqrt(
      covariance.get(0, 0) + 2 * z * covariance.get(0, 1) + z * z * covariance.get(1, 1),
    );
    const percent = (value: number) => (100 * value).toPrecision(3);
    row(
      `S/N ${signal_to_noise}, ${flicker_rms > 0 ? "flickering 6 %" : "quiet"}`,
      threshold.toFixed(1),
      `${percent(f95)} ± ${percent(error)} %`,
      `${percent(middle)} %`,
      `${percent(guess)} ± ${percent(limit.fraction_95_error[cell]!)} %`,
    );
    console.error(shares.map(percent).join(" "), found.join(" "));
  }
}
