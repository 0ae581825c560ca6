// How often stated errors hold: place of a 10 % spot by entropy and total variation, systemic velocity
// by parity, probabilities of "can any map fit".
//   deno run --allow-read test/bench/entropy_coverage.ts [--seeds 1000] [--replicas 20] [--only places|tests]
import { kolmogorovSmirnov } from "@millrace/millrace/numerics";
import {
  canAnyMapFit,
  featurePeaks,
  type InversionRecipe,
  makeInverter,
  mapFeatures,
  maximumEntropy,
  remakeMap,
  resampleMaps,
  systemicByParity,
  totalVariation,
} from "@millrace/millrace/tomography";
import { coverageProblem, SPOT_SEEN } from "../tomography/coverage_problem.ts";

const option = (name: string, otherwise: string) => {
  const at = Deno.args.indexOf(`--${name}`);
  return at < 0 ? otherwise : Deno.args[at + 1] ?? otherwise;
};
const SEEDS = Number(option("seeds", "1000")), REPLICAS = Number(option("replicas", "20"));
const ONLY = option("only", "");

function share(values: readonly number[]): string {
  const held = values.filter((p) => Math.abs(p) < 1).length / values.length;
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  const error = Math.sqrt(held * (1 - held) / values.length);
  return `${(100 * held).toFixed(1)} ± ${(100 * error).toFixed(1)} % | ${mean.toFixed(2)}`;
}

async function places(method: string, signal_to_noise: number): Promise<void> {
  const pulls: { x: number[]; y: number[] } = { x: [], y: [] };
  const off: { x: number; y: number } = { x: 0, y: 0 };
  let lost = 0;
  for (let seed = 1; seed <= SEEDS; seed++) {
    const { trail, shape, resolution_kms } = coverageProblem({ signal_to_noise, seed });
    const recipe = held(method, trail, shape);
    if (recipe === null) {
      lost++;
      continue;
    }
    const { map } = makeInverter(trail, recipe)(trail);
    const look = { resolution_kms };
    const peaks = featurePeaks(map, look);
    const spread = await resampleMaps(trail, { ...look, recipe, count: REPLICAS, seed, peaks });
    // Total variation moves features; entropy does not, beside its noise.
    const remade = recipe.inversion === "total-variation"
      ? remakeMap(trail, { recipe, map })
      : null;
    const [found] = mapFeatures(map, { ...look, spread, remade, least_sigma: 0, limit: 40 })
      .filter((f) =>
        Math.hypot(f.vx_kms - SPOT_SEEN.vx_kms, f.vy_kms - SPOT_SEEN.vy_kms) < resolution_kms
      );
    if (found === undefined || !(found.vx_error_kms! > 0)) {
      lost++;
      continue;
    }
    pulls.x.push((found.vx_kms - SPOT_SEEN.vx_kms) / found.vx_error_kms!);
    pulls.y.push((found.vy_kms - SPOT_SEEN.vy_kms) / found.vy_error_kms!);
    off.x += found.vx_kms - SPOT_SEEN.vx_kms;
    off.y += found.vy_kms - SPOT_SEEN.vy_kms;
  }
  const n = pulls.x.length;
  console.log(
    `| ${method} | ${signal_to_noise} | ${n} | ${share(pulls.x)} | ${share(pulls.y)} | ${
      (off.x / n).toFixed(2)
    }, ${(off.y / n).toFixed(2)} | ${lost} |`,
  );
}

type Problem = ReturnType<typeof coverageProblem>;

/** The recipe of a seed's map with its multiplier or weight held; null where no map was reached. */
function held(
  method: string,
  trail: Problem["trail"],
  shape: Problem["shape"],
): InversionRecipe | null {
  try {
    if (method === "total variation") {
      const found = totalVariation(trail, shape);
      return { inversion: "total-variation", ...shape, weight: found.weight, level: found.level };
    }
    const prior = method === "entropy, uniform" ? { kind: "uniform" } as const : undefined;
    const asked = { ...shape, ...(prior === undefined ? {} : { prior }) };
    const found = maximumEntropy(trail, asked);
    const { multiplier, level, map } = found;
    return { inversion: "entropy", ...asked, multiplier, level, start: map };
  } catch {
    return null;
  }
}

if (ONLY === "" || ONLY === "places") {
  console.log(
    "| map | S/N | seeds | Vx within 1 σ | mean pull | Vy within 1 σ | mean pull | bias, km/s | lost |",
  );
  console.log("| --- | --- | --- | --- | --- | --- | --- | --- | --- |");
  const methods = option("methods", "entropy, uniform;entropy, blurred;total variation").split(";");
  for (const method of methods) {
    for (const signal_to_noise of [10, 30, 100]) await places(method, signal_to_noise);
  }
}
if (ONLY === "" || ONLY === "tests") {
  const p = { moments: [] as number[], mirror: [] as number[], core: [] as number[] };
  const pulls: number[] = [];
  for (let seed = 1; seed <= SEEDS; seed++) {
    const { trail, shape } = coverageProblem({ signal_to_noise: 30, seed });
    const found = canAnyMapFit(trail, { ...shape, seed: 10_000 + seed, simulations: 10 });
    p.moments.push(found.moments!.p_value);
    p.mirror.push(found.mirror!.p_value);
    p.core.push(found.core.p_value);
    const gamma = systemicByParity(trail, {
      systemic_kms: shape.systemic_kms - 10,
      half_range_kms: 1050,
    });
    if (gamma !== null) pulls.push((gamma.systemic_kms - shape.systemic_kms) / gamma.error_kms);
  }
  console.log(`\ngamma by parity within 1 σ | mean pull: ${share(pulls)}, of ${pulls.length}`);
  for (const [name, values] of Object.entries(p)) {
    console.log(`${name}: KS probability ${kolmogorovSmirnov(values).probability.toFixed(3)}`);
  }
}
