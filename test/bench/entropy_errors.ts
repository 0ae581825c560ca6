// Which inversion when: r.m.s. error of the map over that of the truth, by source and signal to noise,
// as a Markdown table: deno run --allow-read test/bench/entropy_errors.ts [--seeds 5]
import { ballisticStream, streamVelocities } from "@millrace/millrace/binary";
import { NotConverged } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  type InversionRecipe,
  makeInverter,
  makeProjector,
  type VelocityMap,
} from "@millrace/millrace/tomography";
import { benchSampling, gaussianMap } from "../tomography/samplings.ts";

const at = Deno.args.indexOf("--seeds");
const SEEDS = at < 0 ? 5 : Number(Deno.args[at + 1]);
const { sampling, pixels } = benchSampling("small");
const shape = { pixels, half_width_kms: 1000, systemic_kms: 13.7 };
const WIDTH_KMS = 1200;

function normalised(map: Float64Array): Float64Array {
  const step = 2000 / (pixels - 1);
  const flux = map.reduce((a, b) => a + b, 0) * step * step;
  return map.map((f) => f * WIDTH_KMS / flux);
}

function disc(inner: number, outer: number): Float64Array {
  const step = 2000 / (pixels - 1);
  return normalised(Float64Array.from({ length: pixels * pixels }, (_, k) => {
    const v = Math.hypot((k % pixels) * step - 1000, Math.floor(k / pixels) * step - 1000 + 60);
    return Math.exp(-Math.max(0, v - inner) / 300) /
      ((1 + Math.exp((inner - v) / 25)) * (1 + Math.exp((v - outer) / 25)));
  }));
}

function along(points: readonly (readonly [number, number])[], width: number): Float64Array {
  return normalised(
    gaussianMap(shape, points.map(([vx, vy]) => ({ flux: 1, vx, vy, s1: width, s2: width }))),
  );
}

const stream = streamVelocities(ballisticStream(0.25), {
  mass_ratio: 0.25,
  k_accretor_kms: 70,
  k_donor_kms: 280,
});
const path = Array.from(stream.vx_kms, (vx, i) => [vx, stream.vy_kms[i]!] as const)
  .filter(([vx, vy]) => Math.hypot(vx, vy) < 850);
const mixed = (a: Float64Array, b: Float64Array, share: number) =>
  a.map((f, k) => (1 - share) * f + share * b[k]!);
const DISC = disc(380, 800);
const SOURCES: Readonly<Record<string, Float64Array>> = {
  "disc": DISC,
  "disc, 10 % spot": mixed(DISC, along([[-420, 180]], 50), 0.1),
  "thin ring": along(
    Array.from({ length: 90 }, (_, i) => {
      const angle = 2 * Math.PI * i / 90;
      return [550 * Math.cos(angle), 550 * Math.sin(angle)] as const;
    }),
    25,
  ),
  "disc, 20 % stream": mixed(DISC, along(path, 30), 0.2),
  "donor face alone": along([[-30, 190], [0, 200], [30, 190], [0, 240]], 30),
  "flat disc, sharp edges": normalised(DISC.map((_, k) => {
    const step = 2000 / (pixels - 1);
    const v = Math.hypot((k % pixels) * step - 1000, Math.floor(k / pixels) * step - 1000);
    return v > 380 && v < 800 ? 1 : 0;
  })),
};
const RECIPES: Readonly<Record<string, InversionRecipe>> = {
  "back-projection": { inversion: "back-projection", ...shape },
  "entropy, uniform": { inversion: "entropy", ...shape, prior: { kind: "uniform" } },
  "entropy, blurred": { inversion: "entropy", ...shape },
  "variation, noise weight": { inversion: "total-variation", ...shape },
  "variation, chi-square": { inversion: "total-variation", ...shape, reduced_chi_square: 1 },
};

function invert(recipe: InversionRecipe, trail: Parameters<typeof makeInverter>[0]): VelocityMap {
  try {
    return makeInverter(trail, recipe)(trail).map;
  } catch (cause) {
    if (!(cause instanceof NotConverged)) throw cause;
    return cause.partial.map;
  }
}

console.log(`| source | S/N | ${Object.keys(RECIPES).join(" | ")} |`);
console.log(`| --- | --- |${" --- |".repeat(Object.keys(RECIPES).length)}`);
for (const [name, truth] of Object.entries(SOURCES)) {
  const clean = makeProjector(sampling, shape).forward(truth);
  for (const signal_to_noise of [10, 30, 100]) {
    const noise = Math.SQRT2 / signal_to_noise;
    const cells = Object.values(RECIPES).map((recipe) => {
      let sum = 0;
      for (let seed = 1; seed <= SEEDS; seed++) {
        const random = randomStream(seed);
        const flux = clean.map((f) => f + noise * random.normal());
        const { intensity } = invert(recipe, { sampling, flux, error: flux.map(() => noise) });
        let off = 0, all = 0;
        truth.forEach((t, k) => {
          off += (intensity[k]! - t) ** 2;
          all += t * t;
        });
        sum += Math.sqrt(off / all);
      }
      return (sum / SEEDS).toFixed(3);
    });
    console.log(`| ${name} | ${signal_to_noise} | ${cells.join(" | ")} |`);
  }
}
