/**
 * Coverage of the orbit's error bars over seeds 1 to N (default 1000), as a Markdown table: share of
 * 68 per cent intervals that hold the truth, mean and root mean square of the pull.
 *
 *     deno run --allow-read test/bench/orbit_coverage.ts [N]
 */
import { randomStream } from "@millrace/millrace/numerics";
import {
  diagnosticDiagram,
  donorVelocities,
  findPlateau,
  fitOrbit,
  gaussianTemplate,
  matchExposures,
  orbitalSmear,
} from "@millrace/millrace/orbit";
import type { Model } from "@millrace/millrace/synthesis";
import { donorTrail, exposures, modelTrail, SODIUM, withNoise } from "../orbit/simulated_trail.ts";

const seeds = Number(Deno.args[0] ?? 1000);
const K1 = 75, K2 = 340, GAMMA = -15;

function row(name: string, pulls: readonly number[], more = ""): void {
  const n = pulls.length;
  const share = (limit: number) => pulls.filter((z) => Math.abs(z) < limit).length / n;
  const mean = pulls.reduce((sum, z) => sum + z, 0) / n;
  const rms = Math.sqrt(pulls.reduce((sum, z) => sum + z * z, 0) / n);
  const cells = [
    name,
    n,
    `${(100 * share(1)).toFixed(1)} %`,
    `${(100 * share(2)).toFixed(1)} %`,
    mean.toFixed(3),
    rms.toFixed(3),
    more,
  ];
  console.log(`| ${cells.join(" | ")} |`);
}

console.log("| quantity | measured | within 1 σ | within 2 σ | mean pull / σ | rms pull | note |");
console.log("| --- | --- | --- | --- | --- | --- | --- |");

const sampling = exposures({ count: 60 });
const spotted = (share: number, spot: Model["spot"]): Model => ({
  parts: ["disc", "spot"],
  disc: { equivalent_width_kms: 2500 },
  spot: { equivalent_width_kms: 2500 * share / (1 - share), ...spot },
});
const discs: readonly [string, Model, number][] = [
  ["symmetric disc", { parts: ["disc"], disc: { equivalent_width_kms: 2500 } }, 0.05],
  [
    "symmetric disc, twice the noise",
    { parts: ["disc"], disc: { equivalent_width_kms: 2500 } },
    0.1,
  ],
  ["10 % spot at the stream's velocity", spotted(0.1, {}), 0.05],
  ["10 % spot at the rim's velocity", spotted(0.1, { mixing: 1 }), 0.05],
  ["the same, low noise", spotted(0.1, { mixing: 1 }), 0.02],
  ["10 % spot at 0.15 a", spotted(0.1, { radius_over_a: 0.15 }), 0.05],
  [
    "10 % spot, fast and wide",
    spotted(0.1, { radius_over_a: 0.15, sigma_kms: 150, mixing: 0.5 }),
    0.05,
  ],
];
for (const [name, model, error] of discs) {
  const clean = modelTrail(model, sampling, { error });
  const k: number[] = [], gamma: number[] = [];
  for (let seed = 1; seed <= seeds; seed++) {
    const plateau = findPlateau(diagnosticDiagram(withNoise(clean, randomStream(seed))));
    if (!plateau.accepted) continue;
    k.push((plateau.fit!.k_kms - K1) / plateau.fit!.k_error_kms);
    gamma.push((plateau.fit!.systemic_kms - GAMMA) / plateau.fit!.systemic_error_kms);
  }
  const right = k.filter((z) => Math.abs(z) < 2).length + seeds - k.length;
  if (k.length === 0) {
    console.log(`| K1, ${name} | 0 | | | | | never measured |`);
    continue;
  }
  row(`K1, ${name}`, k, `right or not measured: ${(100 * right / seeds).toFixed(1)} %`);
  row(`γ, ${name}`, gamma);
}

const nights = exposures({
  count: 40,
  reach_kms: 1500,
  pixel_kms: 30,
  sigma_kms: 45,
  per_orbit: 20,
});
const cycle = nights.cycle.map((c) => c >= 1 ? c + 12 : c);
const clean = donorTrail({ ...nights, cycle }, { error: 0.05 });
const template = gaussianTemplate(clean.line, {
  components_vacuum_angstrom: SODIUM,
  sigma_kms: 45,
});
const smear_kms = orbitalSmear(clean, { harmonics_kms: Float64Array.of(GAMMA, K2, 0) });
const donor = {
  k: [] as number[],
  gamma: [] as number[],
  period: [] as number[],
  zero: [] as number[],
};
for (let seed = 1; seed <= seeds; seed++) {
  const trail = withNoise(clean, randomStream(seed));
  const { curve } = donorVelocities(trail, matchExposures(trail, template, { smear_kms }), {
    search_kms: [-500, 500],
  });
  const fit = fitOrbit([curve]);
  const star = fit.stars[0]!;
  donor.k.push((star.k_kms - K2) / star.k_error_kms);
  donor.gamma.push((star.systemic_kms - GAMMA) / star.systemic_error_kms);
  donor.period.push((fit.period_ratio - 1) / fit.period_ratio_error);
  donor.zero.push(
    (fit.conjunction_orbits - Math.round(fit.conjunction_orbits)) / fit.conjunction_error_orbits,
  );
}
row("K2, sodium doublet on two nights", donor.k);
row("γ of the donor", donor.gamma);
row("P, 14 orbits spanned", donor.period);
row("T0", donor.zero);
