import { refereeChecklist, type ReportContent } from "../../engine/figures/mod.ts";
import { exampleContent } from "./example_content.ts";
import { exampleSecondLine } from "./example_subject.ts";

/** A report of two lines, the first by two methods; all of it invented. */
export function exampleReport(): ReportContent {
  const first = exampleContent();
  const second = exampleSecondLine();
  const { map, model, residual, features, trail } = first;
  const smooth = { ...map, intensity: map.intensity.map((value) => Math.sqrt(value * 1e-3)) };
  return {
    title: "VX-0417",
    version: "0.1.0",
    subjects: [
      {
        line: first.line,
        systemic_kms: 27,
        grid: trail.grid,
        sources: Array.from({ length: trail.grid.rows }, (_, i) => `night1/exposure-${i + 1}.fits`),
        maps: [
          { method: "maximum entropy", map, model, residual, reduced_chi_square: 1.01, features },
          {
            method: "back-projection",
            map: smooth,
            model: model.map((value) => 0.9 * value),
            residual,
            reduced_chi_square: 1.32,
          },
        ],
      },
      {
        line: second.line,
        systemic_kms: 27,
        grid: second.trail!.grid,
        maps: [{
          method: "maximum entropy",
          map: second.map!,
          model: second.model!,
          residual: second.residual!,
          reduced_chi_square: 1.04,
          features: second.features!,
        }],
      },
    ],
    binary: {
      mass_ratio: 70 / 320,
      k_accretor_kms: 70,
      k_donor_kms: 320,
      outer_radius_over_a: 0.3,
      inner_radius_over_a: 0.05,
    },
    results: [
      { quantity: "*K*_{1}", value: 70.12, error: 2.34, unit: "km s^{−1}", note: "wings of Hβ" },
      { quantity: "*K*_{2}", value: 320.4, error: 4.1, unit: "km s^{−1}", note: "Na I 8190" },
      { quantity: "*M*_{1}", value: null, error: null, unit: "M_{☉}", note: "no inclination" },
    ],
    checklist: refereeChecklist({
      zero: { marks: "donor at inferior conjunction", source: "target file", phase_error: 0.0004 },
      systemic: { kms: 27, error_kms: 3, source: "target file" },
      rest: { air_angstrom: 4861.33, source: "line list" },
      normalisation: "divided by a line through two windows",
      smear: { kms: 210, resolution_kms: 60, modelled: true },
      sampling: { exposures: 60, largest_gap: 0.02 },
      fit: { reduced_chi_square: 1.01, noise_scale: 1.07 },
      halves: { seen: true, detail: "Seen in odd and even exposures, 11 and 19 km/s apart." },
    }),
    made: [
      { name: "Version", value: "0.1.0" },
      { name: "Seed", value: "1" },
      { name: "Settings digest", value: "sha256 0123456789abcdef" },
    ],
    target_text: 'format = 1\ntitle = "VX-0417"\n\n[orbit]\nperiod_d = 0.0823714\n',
  };
}
