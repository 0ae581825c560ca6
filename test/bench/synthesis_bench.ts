// Speed of the forward model, for `deno bench test/bench/synthesis_bench.ts`. Goals on one core:
// disc + spot on 64 × 220 samples in 2 ms; every part without eclipse in 20 ms.
import { binaryFrom } from "@millrace/millrace/binary";
import { type Model, synthesize } from "@millrace/millrace/synthesis";
import type { Sampling } from "@millrace/millrace/trail";

const rows = 64, columns = 220;

/** 64 exposures over 1.3 orbits of 220 pixels each, at rest a little differently in each. */
const sampling: Sampling = {
  count: rows,
  phase: Float64Array.from({ length: rows }, (_, i) => (1.3 * i / rows) % 1),
  cycle: Float64Array.from({ length: rows }, (_, i) => Math.floor(1.3 * i / rows)),
  phase_width: new Float64Array(rows).fill(0.018),
  start: Uint32Array.from({ length: rows + 1 }, (_, i) => i * columns),
  velocity_kms: Float64Array.from(
    { length: rows * columns },
    (_, n) => 20 * (n % columns - columns / 2) + 0.1 * Math.floor(n / columns),
  ),
  pixel_kms: new Float64Array(rows * columns).fill(20),
  profile_sigma_kms: new Float64Array(rows).fill(40),
};
const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320, inclination_deg: 80 });
const every = ["disc", "spot", "stream", "donor", "accretor", "outflow"] as const;

const models: Record<string, Model> = {
  "disc + spot": { parts: ["disc", "spot"] },
  "disc": { parts: ["disc"] },
  "every part": {
    parts: every,
    spot: { tail_deg: 20, beaming: 0.5 },
    stream: { overflow: 0.3 },
    outflow: { trough_equivalent_width_kms: 200 },
  },
  "every part, thick turbulent two-armed disc": {
    parts: every,
    disc: {
      optical_depth: "thick",
      turbulence_kms: 40,
      turbulence_index: 0.5,
      two_armed_amplitude: 0.5,
    },
    spot: { tail_deg: 20, beaming: 0.5 },
    stream: { overflow: 0.3 },
    outflow: { trough_equivalent_width_kms: 200 },
  },
  "every part with eclipse": {
    parts: every,
    spot: { tail_deg: 20 },
    eclipse: { enabled: true, continuum_disc: 0.6, continuum_accretor: 0.1 },
  },
};

for (const [name, model] of Object.entries(models)) {
  Deno.bench(`${name}, ${rows} x ${columns}`, () => {
    synthesize(model, { binary, sampling, systemic_kms: 27 });
  });
}
