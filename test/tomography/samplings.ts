// Samplings and closed-form trails for the tests of this room.
import type { ProfileGrid } from "@millrace/millrace/tomography";
import type { Sampling } from "@millrace/millrace/trail";

export interface PlainSampling {
  readonly phases: ArrayLike<number>;
  readonly bins: number;
  readonly first_kms: number;
  readonly step_kms: number;
  readonly sigma_kms: number;
  readonly phase_width?: number;
}

/** Every exposure on the same uniform velocities. */
export function plainSampling(options: PlainSampling): Sampling {
  const { phases, bins, first_kms, step_kms, sigma_kms, phase_width = 0 } = options;
  const count = phases.length;
  return {
    count,
    phase: Float64Array.from(phases, (p) => p - Math.floor(p)),
    cycle: Float64Array.from(phases, (p) => Math.floor(p)),
    phase_width: new Float64Array(count).fill(phase_width),
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
    velocity_kms: Float64Array.from(
      { length: count * bins },
      (_, k) => first_kms + (k % bins) * step_kms,
    ),
    pixel_kms: new Float64Array(count * bins).fill(step_kms),
    profile_sigma_kms: new Float64Array(count).fill(sigma_kms),
  };
}

/** Exposures whose pixels, profiles and durations all differ. */
export function ragged(count: number, random: () => number): Sampling {
  const start = [0];
  const velocity: number[] = [], pixel: number[] = [];
  for (let i = 0; i < count; i++) {
    const bins = 40 + Math.floor(40 * random());
    let v = -900 - 300 * random();
    for (let k = 0; k < bins; k++) {
      const width = 25 + 10 * random();
      velocity.push(v + width / 2);
      pixel.push(width);
      v += width;
    }
    start.push(velocity.length);
  }
  return {
    count,
    phase: Float64Array.from({ length: count }, random),
    cycle: new Float64Array(count),
    phase_width: Float64Array.from({ length: count }, () => 0.04 * random()),
    start: Uint32Array.from(start),
    velocity_kms: Float64Array.from(velocity),
    pixel_kms: Float64Array.from(pixel),
    profile_sigma_kms: Float64Array.from({ length: count }, () => 20 + 20 * random()),
  };
}

/** The benchmark's geometry, as in test/bench/peers.py. */
export const SIZES = {
  small: [101, 50, 150],
  medium: [201, 100, 250],
  large: [401, 300, 500],
} as const;

export function benchSampling(size: keyof typeof SIZES): { sampling: Sampling; pixels: number } {
  const [pixels, count, bins] = SIZES[size];
  const step_kms = 3000 / (bins - 1);
  // A fixed ripple stands for the peers' random offsets in phase.
  const phases = Array.from({ length: count }, (_, i) => (i + 0.15 * Math.sin(7 * i)) / count);
  return {
    pixels,
    sampling: plainSampling({
      phases,
      bins,
      first_kms: -1500,
      step_kms,
      sigma_kms: 2 / Math.sqrt(8 * Math.LN2) * step_kms,
    }),
  };
}

export interface GaussianBlob {
  readonly flux: number;
  readonly vx: number;
  readonly vy: number;
  readonly s1: number;
  readonly s2: number;
  readonly tilt_deg?: number;
}

/** Sum of Gaussians at pixel centres; `tilt_deg` turns the first axis from +Vx towards +Vy. */
export function gaussianMap(
  shape: { readonly pixels: number; readonly half_width_kms: number },
  blobs: readonly GaussianBlob[],
): Float64Array {
  const { pixels, half_width_kms } = shape;
  const step = 2 * half_width_kms / (pixels - 1);
  const map = new Float64Array(pixels * pixels);
  for (const { flux, vx, vy, s1, s2, tilt_deg = 0 } of blobs) {
    const cos = Math.cos(tilt_deg * Math.PI / 180), sin = Math.sin(tilt_deg * Math.PI / 180);
    for (let k = 0; k < map.length; k++) {
      const x = (k % pixels) * step - half_width_kms - vx;
      const y = Math.floor(k / pixels) * step - half_width_kms - vy;
      const a = (x * cos + y * sin) / s1, b = (y * cos - x * sin) / s2;
      map[k] = map[k]! + flux / (2 * Math.PI * s1 * s2) * Math.exp(-0.5 * (a * a + b * b));
    }
  }
  return map;
}

/** The trail of such blobs in closed form, at the samples of a sampling without smearing. */
export function gaussianTrail(
  sampling: Sampling,
  blobs: readonly GaussianBlob[],
  systemic_kms = 0,
): Float64Array {
  const flux = new Float64Array(sampling.velocity_kms.length);
  for (let i = 0; i < sampling.count; i++) {
    const angle = 2 * Math.PI * sampling.phase[i]!;
    const nx = -Math.cos(angle), ny = Math.sin(angle);
    for (const blob of blobs) {
      const tilt = (blob.tilt_deg ?? 0) * Math.PI / 180;
      const a = nx * Math.cos(tilt) + ny * Math.sin(tilt);
      const b = ny * Math.cos(tilt) - nx * Math.sin(tilt);
      const sigma = Math.sqrt(
        (a * blob.s1) ** 2 + (b * blob.s2) ** 2 + sampling.profile_sigma_kms[i]! ** 2,
      );
      for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
        const v = (sampling.velocity_kms[k]! - systemic_kms) / (1 + systemic_kms / 299792.458);
        const z = (v - nx * blob.vx - ny * blob.vy) / sigma;
        flux[k] = flux[k]! +
          blob.flux * Math.exp(-0.5 * z * z) / (Math.sqrt(2 * Math.PI) * sigma);
      }
    }
  }
  return flux;
}

/** The same samples as a uniform grid, for samplings made by `plainSampling`. */
export function plainGrid(
  sampling: Sampling,
  flux: Float64Array,
  error: Float64Array,
): ProfileGrid {
  const columns = sampling.start[1]!;
  return {
    rows: sampling.count,
    columns,
    first_kms: sampling.velocity_kms[0]!,
    step_kms: sampling.velocity_kms[1]! - sampling.velocity_kms[0]!,
    phase: sampling.phase,
    flux,
    error,
  };
}
