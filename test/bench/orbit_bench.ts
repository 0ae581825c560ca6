import { randomStream } from "@millrace/millrace/numerics";
import {
  backProjectCorrelation,
  diagnosticDiagram,
  findPlateau,
  gaussianTemplate,
  lombScargle,
  matchExposures,
  solveMasses,
} from "@millrace/millrace/orbit";
import { donorTrail, exposures, modelTrail, SODIUM, withNoise } from "../orbit/simulated_trail.ts";

const random = randomStream(1);
const disc = withNoise(
  modelTrail({ parts: ["disc"], disc: { equivalent_width_kms: 2500 } }, exposures({ count: 60 }), {
    error: 0.05,
  }),
  random,
);
Deno.bench("diagnostic diagram and plateau, 60 exposures of 301 pixels", () => {
  findPlateau(diagnosticDiagram(disc));
});

const sodium = withNoise(
  donorTrail(exposures({ count: 60, reach_kms: 1500, pixel_kms: 25, sigma_kms: 40 }), {
    error: 0.05,
  }),
  random,
);
const template = gaussianTemplate(sodium.line, {
  components_vacuum_angstrom: SODIUM,
  sigma_kms: 40,
});
Deno.bench("back-projected cross-correlation, 60 exposures of 121 pixels", () => {
  backProjectCorrelation(sodium, matchExposures(sodium, template));
});

const time = Float64Array.from({ length: 100 }, () => 10 * random.uniform());
const series = { time, value: time.map((t) => Math.sin(76 * t)), error: time.map(() => 0.5) };
const frequency = Float64Array.from({ length: 10000 }, (_, k) => 3 + 0.0017 * k);
Deno.bench("Lomb-Scargle, 100 velocities at 10000 frequencies", () => {
  lombScargle(series, frequency);
});

Deno.bench("masses, 20000 draws", () => {
  solveMasses({
    period_d: { value: 0.08, error: 0 },
    k_accretor_kms: { value: 75, error: 2 },
    k_donor_kms: { value: 340, error: 3 },
    inclination: { deg: { value: 65, error: 2 } },
  }, { random: randomStream(1) });
});
