// How often a map of a perfectly round disc claims a feature over 3 sigma, how often a 10 % spot on it is
// found, and with how many other features, by the number of exposures: as the map alone would have
// them, and with streaks of disc and spots explained.
//   deno run --allow-read test/bench/round_disc_claims.ts [--seeds 20] [--replicas 50]
//     [--exposures 6,12,20,40,60] [--methods back-projection,entropy,total-variation] [--sn 30,100] [--sharp]
import { NotConverged } from "@millrace/millrace/errors";
import {
  type InversionRecipe,
  maximumEntropy,
  totalVariation,
} from "@millrace/millrace/tomography";
import {
  claimedFeatures,
  isSpot,
  type RoundDiscProblem,
  roundDiscProblem,
} from "../tomography/round_disc_problem.ts";

const option = (name: string, otherwise: string) => {
  const at = Deno.args.indexOf(`--${name}`);
  return at < 0 ? otherwise : Deno.args[at + 1] ?? otherwise;
};
const SEEDS = Number(option("seeds", "20")), REPLICAS = Number(option("replicas", "50"));
const sharp = Deno.args.includes("--sharp");

function recipeOf(method: string, { trail, shape }: RoundDiscProblem): InversionRecipe {
  if (method === "entropy") {
    const { multiplier, level, map } = maximumEntropy(trail, { ...shape, raise_goal: true });
    const held = { multiplier, level, start: map, max_iterations: 1000 };
    return { inversion: "entropy", ...shape, ...held };
  }
  if (method === "total-variation") {
    const { weight, level, map } = totalVariation(trail, { ...shape, max_iterations: 2000 });
    const held = { weight, level, start: map, max_iterations: 2000 };
    return { inversion: "total-variation", ...shape, ...held };
  }
  return { inversion: "back-projection", ...shape };
}

console.log(
  "| method | S/N | exposures | | disc: maps with claims | claims | most | spot found | others |",
);
console.log("| --- | --- | --- | --- | --- | --- | --- | --- | --- |");
for (const method of option("methods", "back-projection,entropy,total-variation").split(",")) {
  for (const signal_to_noise of option("sn", "30,100").split(",").map(Number)) {
    for (const exposures of option("exposures", "6,12,20,40,60").split(",").map(Number)) {
      for (const explained of [false, true]) {
        let made = 0, maps = 0, claims = 0, most = 0, spots = 0, found = 0, others = 0;
        for (let seed = 1; seed <= SEEDS; seed++) {
          const about = { exposures, signal_to_noise, seed, sharp };
          const claimed = async (spot: number) => {
            const problem = roundDiscProblem({ ...about, spot });
            const recipe = recipeOf(method, problem);
            return await claimedFeatures(problem, { recipe, replicas: REPLICAS, explained });
          };
          try {
            const features = await claimed(0);
            made++;
            maps += features.length > 0 ? 1 : 0;
            claims += features.length;
            most = Math.max(most, ...features.map((f) => f.significance_sigma!));
            const bright = await claimed(0.1);
            spots++;
            found += bright.some(isSpot) ? 1 : 0;
            others += bright.filter((f) => !isSpot(f)).length;
          } catch (error) {
            if (!(error instanceof NotConverged)) throw error;
          }
        }
        console.log(
          `| ${method} | ${signal_to_noise} | ${exposures} | ${
            explained ? "explained" : "alone"
          } | ` +
            `${maps} of ${made} | ${(claims / made).toFixed(1)} | ${most.toFixed(1)} | ` +
            `${found} of ${spots} | ${(others / spots).toFixed(1)} |`,
        );
      }
    }
  }
}
