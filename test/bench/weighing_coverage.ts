/**
 * Errors of a spot with 10 % of the light, over N sets (default 200): share of 68 % intervals that
 * hold the truth, and bias in standard deviations. Rows have noise of their own: seeds 1 to N, 10 001
 * to 10 000 + N, 20 001 to 20 000 + N. With the same seeds, one row's luck would be every row's.
 *
 *     deno run --allow-read test/bench/weighing_coverage.ts [N] [part of a row's name]
 */
import { spotPlace } from "@millrace/millrace/synthesis";
import { compareHypotheses, prepareProblem, weighingData } from "@millrace/millrace/weighing";
import { spotted } from "../weighing/made.ts";
import { binary, row, trailOf } from "./weighing_data.ts";

const seeds = Number(Deno.args[0] ?? 200);
const chosen = Deno.args[1];
const sets = [["disc", "spot"]] as const;
const model = spotted(0.1);
const { vx_kms, vy_kms } = spotPlace(model, binary);
const truth: Record<string, number> = {
  "spot.vx_kms": vx_kms,
  "spot.vy_kms": vy_kms,
  "spot.flux_fraction": 0.1,
  "spot.sigma_kms": 60,
  "disc.outer_radius_over_a": 0.3,
};

row("data", "quantity", "sets", "within 1 σ", "mean pull", "rms pull", "median error");
row("---", "---", "---", "---", "---", "---", "---");
for (
  const [name, signal_to_noise, flicker_rms, before] of [
    ["S/N 25, quiet", 25, 0, 0],
    ["S/N 25, flickering 6 %", 25, 0.06, 10_000],
    ["S/N 8, flickering 6 %", 8, 0.06, 20_000],
  ] as const
) {
  if (chosen !== undefined && !name.includes(chosen)) continue;
  const pulls = new Map<string, number[]>();
  const sizes = new Map<string, number[]>();
  for (let k = 1; k <= seeds; k++) {
    const trail = trailOf(model, { seed: before + k, signal_to_noise, flicker_rms });
    const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
    const { fitted, errors } = compareHypotheses(prepared, sets, { starts: 1 }).hypotheses[0]!;
    for (const [key, value] of Object.entries(truth)) {
      const pull = (fitted[key]! - value) / (errors[key] ?? NaN);
      pulls.set(key, [...pulls.get(key) ?? [], pull]);
      sizes.set(key, [...sizes.get(key) ?? [], errors[key] ?? NaN]);
    }
  }
  for (const [key, values] of pulls) {
    const mean = values.reduce((sum, z) => sum + z, 0) / seeds;
    const rms = Math.sqrt(values.reduce((sum, z) => sum + z * z, 0) / seeds);
    const inside = values.filter((z) => Math.abs(z) < 1).length / seeds;
    const middle = sizes.get(key)!.sort((a, b) => a - b)[seeds >> 1]!;
    row(
      name,
      key,
      seeds,
      `${(100 * inside).toFixed(1)} %`,
      `${mean.toFixed(2)} ± ${(1 / Math.sqrt(seeds)).toFixed(2)}`,
      rms.toFixed(2),
      middle.toPrecision(2),
    );
  }
}
