import type { PlateSubject } from "../../engine/figures/mod.ts";
import type { VelocityMap } from "../../engine/tomography/mod.ts";
import { exampleBlobs, exampleContent } from "./example_content.ts";

const lines = [
  ["N III 4640", 4641.9],
  ["He II 4686", 4687.02],
  ["He I 4713", 4714.5],
  ["H beta", 4862.691],
  ["He I 4922", 4923.305],
  ["Fe II 4924", 4925.3],
  ["He I 5016", 5017.1],
] as const;

/** A number between −1 and 1 that looks like chance and is always the same. */
function wobble(i: number): number {
  return 2 * (Math.abs(Math.sin(i * 12.9898) * 43758.5453) % 1) - 1;
}

function scaled(map: VelocityMap, by: (value: number, i: number) => number): VelocityMap {
  return { ...map, intensity: map.intensity.map(by) };
}

/** A subject with every field that a panel may need, all of it invented. */
export function exampleSubject(): PlateSubject {
  const content = exampleContent({ pixels: 101 });
  const { map, trail } = content;
  const phase = trail.sampling.phase;
  const phase_width = trail.sampling.phase_width;
  const peak = map.intensity.reduce((top, value) => Math.max(top, value), 0);
  const spread = scaled(map, (value, i) => 0.02 * peak + 0.05 * value + 0.004 * peak * wobble(i));
  const curve = (mean: number, swing: number, shift: number) => (at: number) =>
    mean + swing * Math.sin(2 * Math.PI * (at - shift));
  const measured = (model: (at: number) => number, error: number) => ({
    phase,
    value: phase.map((at, i) => model(at) + error * wobble(i)),
    error: new Float64Array(phase.length).fill(error),
    model,
  });
  const velocity = (k_kms: number, crossing_phase: number, error: number) => ({
    ...measured(curve(27, k_kms, crossing_phase), error),
    k_kms,
    crossing_phase,
    systemic_kms: 27,
  });
  const separation_kms = Array.from({ length: 8 }, (_, i) => 600 + 200 * i);
  const frequency = Array.from({ length: 1200 }, (_, i) => 8 + i * 0.007);
  const shifts = Array.from({ length: 41 }, (_, i) => -73 + 5 * i);
  const masses = Array.from({ length: 50 }, (_, i) => 0.3 + 0.022 * i);
  const ratios = Array.from({ length: 46 }, (_, i) => 0.05 + 0.01 * i);
  const wavelength_angstrom = Array.from({ length: 900 }, (_, i) => 4600 + 0.5 * i);
  const bump = (at: number, middle: number, width: number) =>
    Math.exp(-(((at - middle) / width) ** 2));
  const cloud = Array.from(
    { length: 4000 },
    (_, i) => wobble(i) + wobble(i + 0.3) + wobble(i + 0.7),
  );
  return {
    ...content,
    period_scan: {
      x: Array.from({ length: 11 }, (_, i) => 0.0823714 + 4e-7 * (i - 4)),
      y: Array.from({ length: 11 }, (_, i) => 1.4 * (i - 5) ** 2),
      best: 0.0823718,
      best_error: 3e-7,
      reference: 0.0823714,
      label: "excess of *χ*^{2} − *αS*",
      statistic: "χ² − αS of maps, over its least,",
    },
    sensitivity: {
      closer: {
        map: scaled(map, (value, i) => value + 0.02 * peak * wobble(i)),
        reduced_chi_square: 0.96,
        reached: true,
      },
      looser: {
        map: scaled(map, (value) => 0.97 * value),
        reduced_chi_square: 1.06,
        reached: true,
      },
      half_difference: scaled(map, (value, i) => 0.015 * value + 0.01 * peak * wobble(i)),
    },
    modulation: {
      cosine: scaled(map, (value, i) => 0.2 * value * Math.sin(i / 900)),
      sine: scaled(map, (value, i) => 0.1 * value * Math.cos(i / 300)),
    },
    sampling_structures: scaled(map, (value, i) => 0.05 * value * Math.sin(i / 500)),
    blend_map: {
      name: "He I 4922",
      rest_air_angstrom: 4921.93,
      map: scaled(map, (value) => 0.2 * value),
    },
    null_distribution: {
      null_name: "disc",
      against_name: "disc + spot",
      gains: Array.from({ length: 200 }, (_, i) => 8 * Math.abs(wobble(i)) ** 3),
      observed: 412,
    },
    rims: [{ speed_kms: 500, name: "outer rim" }, { speed_kms: 1400, name: "inner rim" }],
    contour_parts: [0.1, 0.3],
    halves: {
      maps: [
        scaled(map, (value, i) => value + 0.01 * peak * wobble(i)),
        scaled(map, (value, i) => 0.9 * value + 0.01 * peak * wobble(i + 0.5)),
      ],
      names: ["odd exposures", "even exposures"],
    },
    spread,
    resolution: [
      { vx_kms: -1000, vy_kms: -1000, major_kms: 320, minor_kms: 150, angle_deg: 30 },
      { vx_kms: 900, vy_kms: 900, major_kms: 260, minor_kms: 240, angle_deg: -20 },
    ],
    detection_limit: {
      ...scaled(map, (value) => 12 + 400 * value),
      sigma_kms: 60,
      found_part: 0.95,
      false_alarm: 0.01,
      trials: 200,
    },
    spectrum: {
      wavelength_angstrom,
      flux: wavelength_angstrom.map((at, i) =>
        1 + 1.5 * bump(at, 4862.7, 14) + 0.4 * bump(at, 4687, 12) + 0.04 * wobble(i)
      ),
      lines: lines.map(([name, vacuum_angstrom]) => ({
        name,
        vacuum_angstrom,
        air_angstrom: vacuum_angstrom / 1.00028,
        source: "",
      })),
    },
    equivalent_width: [
      { name: "Hβ", ...measured(curve(42, 3, 0.1), 0.8) },
      { name: "He II", ...measured(curve(30, 2, 0.4), 0.8) },
    ],
    violet_red: [measured(curve(1, 0.3, 0.8), 0.05)],
    continuum: [measured(curve(1, 0.1, 0.85), 0.01)],
    velocities: [velocity(70, 0.5, 9), velocity(320, 0, 16)],
    diagnostic: {
      separation_kms,
      k_kms: separation_kms.map((a) => 110 - 0.02 * a),
      k_error_kms: separation_kms.map((a) => 3 + (a / 900) ** 4),
      systemic_kms: separation_kms.map((a) => 27 + wobble(a)),
      systemic_error_kms: separation_kms.map(() => 3),
      crossing_phase: separation_kms.map((a) => 0.55 - a * 1e-5),
      crossing_error: separation_kms.map(() => 0.01),
      chosen_kms: 1600,
    },
    light_centre: {
      vx_kms: separation_kms.map((a) => -60 + 0.02 * a),
      vx_error_kms: separation_kms.map(() => 4),
      vy_kms: separation_kms.map((a) => -90 + 0.008 * a),
      vy_error_kms: separation_kms.map(() => 4),
      line: { intercept_kms: -68, intercept_error_kms: 5, slope: 0.37 },
    },
    periodogram: {
      x: frequency,
      y: frequency.map((at) =>
        0.9 * bump(at, 12.14, 0.08) + 0.5 * bump(at, 13.14, 0.08) + 0.03 * Math.abs(wobble(at))
      ),
      best: 12.14,
      levels: [{ y: 0.33, name: "false alarm 0.1 %" }],
    },
    systemic_scan: {
      x: shifts,
      y: shifts.map((gamma) => 1.01 + 0.4 * ((gamma - 27) / 60) ** 2),
      best: 27,
      best_error: 8,
      label: "*χ*^{2}/*N*",
      statistic: "χ² over the number of samples",
    },
    mass_plane: {
      curves: [{
        name: "*q* = 0.22",
        x: masses,
        y: masses.map((m) => 0.22 * m),
        low: masses.map((m) => 0.2 * m),
        high: masses.map((m) => 0.24 * m),
      }],
      excluded: [{ name: "too heavy", x: [1.38, 1.5, 1.5, 1.38], y: [0, 0, 0.4, 0.4] }],
      samples: {
        x: cloud.map((v) => 0.85 + 0.06 * v),
        y: cloud.map((v, i) => 0.187 + 0.008 * v + 0.005 * wobble(i + 0.9)),
      },
      adopted: { x: 0.85, y: 0.187, x_error: 0.05, y_error: 0.02 },
    },
    inclination_plane: {
      curves: [{ name: "eclipse width", x: ratios, y: ratios.map((q) => 85 - 60 * q) }],
      adopted: { x: 0.22, y: 68, x_error: 0.02, y_error: 2 },
    },
    disc: {
      binary: content.binary!,
      circles: [{ radius_over_a: 0.05 }, { radius_over_a: 0.3, name: "disc" }],
      places: [{ x: 0.25, y: 0.15, name: "1" }],
    },
    coverage: [
      { name: "night 1", phase: phase.slice(0, 35), phase_width },
      { name: "night 2", phase: phase.slice(35), phase_width },
    ],
  };
}

/** The same object in another line: no disc to speak of, a brighter spot. */
export function exampleSecondLine(): PlateSubject {
  const spot = exampleBlobs().at(-1)!;
  const blobs = [{ ...spot, vx: -500, vy: 260, flux: 150 }, {
    vx: 0,
    vy: 180,
    sigma: 90,
    flux: 60,
  }];
  const line = { name: "He II 4686", vacuum_angstrom: 4687.02, air_angstrom: 4685.7, source: "" };
  return { ...exampleContent({ blobs, pixels: 101 }), line };
}
