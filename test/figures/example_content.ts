import { binaryFrom } from "../../engine/binary/mod.ts";
import type { PlateContent } from "../../engine/figures/mod.ts";
import { randomStream } from "../../engine/numerics/mod.ts";

/** A Gaussian blob of emission in velocity space. */
export interface Blob {
  readonly vx: number;
  readonly vy: number;
  readonly sigma: number;
  /** Flux, in units of the continuum × km/s. */
  readonly flux: number;
}

/** A ring of a hundred blobs about the accretor and a spot: enough of a disc to look at. */
export function exampleBlobs(): Blob[] {
  const blobs: Blob[] = [];
  for (let i = 0; i < 120; i++) {
    const angle = 2 * Math.PI * i / 120;
    for (const [speed, flux] of [[560, 12], [760, 7], [1000, 3]] as const) {
      const vx = speed * Math.cos(angle);
      blobs.push({ vx, vy: speed * Math.sin(angle) - 70, sigma: 90, flux });
    }
  }
  return [...blobs, { vx: -620, vy: 330, sigma: 70, flux: 260 }];
}

/** Options of {@linkcode exampleContent}. */
export interface ExampleOptions {
  readonly blobs?: readonly Blob[];
  readonly pixels?: number;
  readonly exposures?: number;
  readonly orbits?: number;
  readonly noise?: number;
}

/** A plate's content made of blobs, exactly projected, with seeded noise. */
export function exampleContent(options: ExampleOptions = {}): PlateContent {
  const { blobs = exampleBlobs(), pixels = 201, exposures = 60, orbits = 1.3, noise = 0.06 } =
    options;
  const half_width_kms = 2000;
  const systemic_kms = 27;
  const stream = randomStream(7);
  const step = 2 * half_width_kms / (pixels - 1);
  const intensity = new Float64Array(pixels * pixels);
  const gauss = (at: number, sigma: number) =>
    Math.exp(-at * at / (2 * sigma ** 2)) / (Math.sqrt(2 * Math.PI) * sigma);
  for (const { vx, vy, sigma, flux } of blobs) {
    const reach = Math.ceil(6 * sigma / step);
    const near = (v: number) => {
      const middle = Math.round((v + half_width_kms) / step);
      const from = Math.max(0, middle - reach);
      const count = Math.max(0, Math.min(pixels, middle + reach + 1) - from);
      const profile = Float64Array.from(
        { length: count },
        (_, i) => gauss(-half_width_kms + (from + i) * step - v, sigma),
      );
      return { from, profile };
    };
    const [x, y] = [near(vx), near(vy)];
    y.profile.forEach((down, j) => {
      const at = (y.from + j) * pixels + x.from;
      x.profile.forEach((across, i) => intensity[at + i]! += flux * down * across);
    });
  }
  const columns = 163;
  const step_kms = 30;
  const first_kms = -81 * step_kms;
  const phase = Float64Array.from(
    { length: exposures },
    (_, i) => (0.9 + orbits * i / exposures) % 1,
  );
  const phase_width = new Float64Array(exposures).fill(0.8 * orbits / exposures);
  const model = new Float64Array(exposures * columns);
  const flux = new Float64Array(exposures * columns);
  const residual = new Float64Array(exposures * columns);
  for (let row = 0; row < exposures; row++) {
    const cos = Math.cos(2 * Math.PI * phase[row]!);
    const sin = Math.sin(2 * Math.PI * phase[row]!);
    for (const { vx, vy, sigma, flux: power } of blobs) {
      const centre = systemic_kms - vx * cos + vy * sin;
      const from = Math.max(0, Math.ceil((centre - 6 * sigma - first_kms) / step_kms));
      const to = Math.min(columns - 1, Math.floor((centre + 6 * sigma - first_kms) / step_kms));
      for (let column = from; column <= to; column++) {
        const away = first_kms + column * step_kms - centre;
        model[row * columns + column]! += power * gauss(away, sigma);
      }
    }
    for (let at = row * columns; at < (row + 1) * columns; at++) {
      residual[at] = noise === 0 ? 0 : stream.normal();
      flux[at] = model[at]! + noise * residual[at]!;
    }
  }
  const error = new Float64Array(exposures * columns).fill(noise || 1);
  return {
    title: "VX-0417",
    line: {
      name: "H beta",
      vacuum_angstrom: 4862.691,
      air_angstrom: 4861.333,
      source: "",
    },
    map: { pixels, half_width_kms, intensity },
    trail: {
      grid: { rows: exposures, columns, first_kms, step_kms, phase, phase_width, flux, error },
      sampling: { count: exposures, phase, phase_width },
    },
    model,
    residual,
    binary: binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 }),
    features: [{ vx_kms: -615, vy_kms: 334, vx_error_kms: 32, vy_error_kms: 21 }],
    systemic_kms,
    method: "maximum entropy",
    reduced_chi_square: 1.01,
  };
}
