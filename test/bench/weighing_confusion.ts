/**
 * Stream against spot: what N weighings (default 6) of each kind of data say, "undecided" allowed. Spots
 * have velocities between the stream's (mixing 0) and the disc's (1); each part has 4 % of the light.
 *
 *     deno run --allow-read test/bench/weighing_confusion.ts [N]
 */
import type { Model } from "@millrace/millrace/synthesis";
import { weighTrail } from "@millrace/millrace/weighing";
import { binary, row, trailOf, WIDTH } from "./weighing_data.ts";

const sets = Number(Deno.args[0] ?? 6);
const SHARE = 0.04;
const disc = { equivalent_width_kms: (1 - SHARE) * WIDTH };
const own = { equivalent_width_kms: SHARE * WIDTH };
const truths: readonly (readonly [string, "spot" | "stream", Model])[] = [
  ...[0, 0.5, 1].map((mixing) =>
    [
      `spot, mixing ${mixing}`,
      "spot",
      { parts: ["disc", "spot"], disc, spot: { ...own, mixing, sigma_kms: 60 } },
    ] as const
  ),
  ...[0, 3].map((brightness_index) =>
    [
      `stream, n = ${brightness_index}`,
      "stream",
      { parts: ["disc", "stream"], disc, stream: { ...own, brightness_index } },
    ] as const
  ),
];

let wrong = 0, all = 0;
row("truth", "S/N", "right", "undecided", "nothing found", "outside", "wrong");
row("---", "---", "---", "---", "---", "---", "---");
for (const [name, part, model] of truths) {
  for (const signal_to_noise of [25, 8]) {
    const counts = { right: 0, undecided: 0, nothing: 0, outside: 0, wrong: 0 };
    for (let seed = 1; seed <= sets; seed++) {
      const trail = trailOf(model, {
        seed,
        signal_to_noise,
        flicker_rms: 0.05,
        exposures: 30,
        pixel_kms: 60,
      });
      const { verdict } = await weighTrail(trail, {
        binary,
        sets: [["disc"], ["disc", "spot"], ["disc", "stream"]],
        trials: 100,
        limit: false,
        seed,
      });
      const { preferred, undecided_with } = verdict;
      if (preferred.length === 0) counts.outside++;
      else if (preferred.length === 1) counts.nothing++;
      else if (undecided_with !== null && undecided_with.length > 1) counts.undecided++;
      else if (preferred.includes(part)) counts.right++;
      else counts.wrong++;
    }
    all += sets;
    wrong += counts.wrong;
    const { right, undecided, nothing, outside } = counts;
    row(name, signal_to_noise, right, undecided, nothing, outside, counts.wrong);
  }
}
console.log(`\nwrong: ${wrong} of ${all}, ${(100 * wrong / all).toFixed(1)} %`);
