import { Matrix, pseudoInverse } from "ml-matrix";
import type { Trail } from "../trail/mod.ts";
import type { ExposureMatch } from "./template_match.ts";
import { smearFactor } from "./velocity_curve.ts";

/** Where a template that moves on a circular orbit is found, all exposures together. */
export interface BackProjectedCorrelation {
  /** Vx of the peak, km/s: 0 when the phases are the donor's. */
  readonly vx_kms: number;
  /** Vy of the peak, km/s: K2. */
  readonly vy_kms: number;
  /** γ of the peak, km/s. */
  readonly systemic_kms: number;
  /** Standard deviations of Vx, Vy, γ, km/s, from the peak's curvature and the pixels' errors. */
  readonly errors_kms: readonly [vx: number, vy: number, systemic: number];
  /** K = √(Vx² + Vy²), km/s. */
  readonly k_kms: number;
  /** Its standard deviation, km/s. */
  readonly k_error_kms: number;
  /** Phase of upward crossing of γ, cycles in [0, 1). */
  readonly crossing_phase: number;
  /** Its standard deviation, cycles. */
  readonly crossing_phase_error: number;
  /** Fall of chi-square at the peak, for one strength in all exposures. */
  readonly gain: number;
  /** Highest fall of chi-square anywhere with the template's sign turned: what noise does. */
  readonly noise_gain: number;
  /** Strength of the template at the peak. */
  readonly strength: number;
  /** Whether the peak stands out: gain of at least 25 and twice that of noise. */
  readonly detected: boolean;
  /** The map of gain at the best γ, for a plate: N × N, row-major, rows of increasing Vy; signed by strength. */
  readonly map: BackProjectedMap;
}

/** Signed fall of chi-square against Vx and Vy. */
export interface BackProjectedMap {
  /** Pixels a side, odd. */
  readonly pixels: number;
  /** Velocity of the centre of the outermost pixel, km/s. */
  readonly half_width_kms: number;
  /** Fall of chi-square, negative where the strength is; `pixels`² values. */
  readonly gain: Float64Array;
}

/** Options of {@linkcode backProjectCorrelation}. */
export interface BackProjectOptions {
  /** Largest K considered, km/s. @default {700} */
  readonly half_width_kms?: number;
  /** Range of γ searched, km/s; equal ends hold it. @default {[-200, 200]} */
  readonly systemic_kms?: readonly [low: number, high: number];
  /** Step of the search, km/s. @default {the sharpest instrumental σ} */
  readonly step_kms?: number;
}

/** Sums on a velocity grid, so that a search costs look-ups alone. */
function tabulate(matches: readonly ExposureMatch[], reach: number, step: number) {
  const half = Math.ceil(reach / step);
  const nodes = 2 * half + 1;
  const cross = new Float64Array(matches.length * nodes), auto = new Float64Array(cross.length);
  matches.forEach((match, i) => {
    for (let k = 0; k < nodes; k++) {
      const [c, a] = match.at((k - half) * step);
      cross[i * nodes + k] = c;
      auto[i * nodes + k] = a;
    }
  });
  return (i: number, v: number): readonly [number, number] => {
    const place = Math.min(nodes - 2, Math.max(0, v / step + half));
    const k = Math.floor(place), share = place - k, at = i * nodes + k;
    return [
      (1 - share) * cross[at]! + share * cross[at + 1]!,
      (1 - share) * auto[at]! + share * auto[at + 1]!,
    ];
  };
}

/**
 * Searches a donor too faint in any one exposure: the cross-correlations of all exposures are added
 * up along every S-wave V = γ − Vx cos 2πφ + Vy sin 2πφ, which is a back-projection of them (Smith,
 * Cameron & Tucknott 1993). With errors in the sums it is the fall of chi-square for a template of
 * one strength on that orbit, so that the width of the peak is the error of K2. Along Vx = 0 it is
 * the co-addition of all spectra at a trial K2.
 *
 * @param trail The trail.
 * @param matches Its matches with a template.
 * @param options Search range.
 * @returns The peak, its errors, and whether to believe it.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { backProjectCorrelation, type DonorTemplate, matchExposures } from "@millrace/millrace/orbit";
 *
 * function speed(trail: Trail, template: DonorTemplate): number | null {
 *   const found = backProjectCorrelation(trail, matchExposures(trail, template));
 *   return found.detected ? found.k_kms : null;
 * }
 * ```
 */
export function backProjectCorrelation(
  trail: Trail,
  matches: readonly ExposureMatch[],
  options: BackProjectOptions = {},
): BackProjectedCorrelation {
  const { sampling } = trail;
  const { half_width_kms = 700, systemic_kms = [-200, 200] } = options;
  const sharpest = sampling.profile_sigma_kms.reduce((a, s) => Math.min(a, s));
  const step = options.step_kms ?? sharpest;
  const farthest = Math.max(Math.abs(systemic_kms[0]), Math.abs(systemic_kms[1]));
  const look = tabulate(matches, half_width_kms * Math.SQRT2 + farthest + 2 * step, sharpest / 3);
  const cosine = Float64Array.from(
    sampling.phase,
    (phase, i) => smearFactor(sampling.phase_width[i]!) * Math.cos(2 * Math.PI * phase),
  );
  const sine = Float64Array.from(
    sampling.phase,
    (phase, i) => smearFactor(sampling.phase_width[i]!) * Math.sin(2 * Math.PI * phase),
  );
  type Sums = (i: number, v: number) => readonly [number, number];
  const sumsAt = (sums: Sums, vx: number, vy: number, gamma: number): readonly [number, number] => {
    let cross = 0, auto = 0;
    for (let i = 0; i < sampling.count; i++) {
      const [c, a] = sums(i, gamma - vx * cosine[i]! + vy * sine[i]!);
      cross += c;
      auto += a;
    }
    return [cross, auto];
  };
  const signed = ([cross, auto]: readonly [number, number]) =>
    auto > 0 ? Math.sign(cross) * cross * cross / auto : 0;

  const half = Math.ceil(half_width_kms / step);
  const pixels = 2 * half + 1;
  const layers = Math.max(1, Math.round((systemic_kms[1] - systemic_kms[0]) / step) + 1);
  let best = { gain: 0, vx: 0, vy: 0, gamma: systemic_kms[0] };
  let lowest = 0;
  const scan = (gamma: number): Float64Array => {
    const gain = new Float64Array(pixels * pixels);
    for (let row = 0; row < pixels; row++) {
      for (let column = 0; column < pixels; column++) {
        const vx = (column - half) * step, vy = (row - half) * step;
        const value = signed(sumsAt(look, vx, vy, gamma));
        gain[row * pixels + column] = value;
        if (value > best.gain) best = { gain: value, vx, vy, gamma };
        lowest = Math.min(lowest, value);
      }
    }
    return gain;
  };
  for (let layer = 0; layer < layers; layer++) {
    const share = layers === 1 ? 0 : layer / (layers - 1);
    scan(systemic_kms[0] + share * (systemic_kms[1] - systemic_kms[0]));
  }

  // Newton's steps on the exact sums, with differences over a good part of the peak's width.
  const free = layers > 1 ? 3 : 2;
  let at = [best.vx, best.vy, best.gamma];
  const exact: Sums = (i, v) => matches[i]!.at(v);
  const value = (p: readonly number[]) => signed(sumsAt(exact, p[0]!, p[1]!, p[2]!));
  const h = sharpest / 4;
  let covariance = Matrix.zeros(3, 3);
  const gradientVariance = (p: readonly number[]) => {
    const [cross, auto] = sumsAt(exact, p[0]!, p[1]!, p[2]!);
    const strength = cross / auto;
    const matrix = Matrix.zeros(free, free);
    matches.forEach((match, i) => {
      const by = [-cosine[i]!, sine[i]!, 1];
      const v = p[2]! + by[0]! * p[0]! + by[1]! * p[1]!;
      const information = (2 * strength) ** 2 * match.information(v);
      for (let a = 0; a < free; a++) {
        for (let b = 0; b < free; b++) {
          matrix.set(a, b, matrix.get(a, b) + information * by[a]! * by[b]!);
        }
      }
    });
    return matrix;
  };
  for (let round = 0; round < 12; round++) {
    const { gradient, hessian } = curvature(value, at, h, free);
    const inverse = pseudoInverse(hessian);
    const move = inverse.mmul(Matrix.columnVector(gradient)).to1DArray();
    // H⁻¹GH⁻¹ with G the variance of the gradient: right also when the template's shape is not quite
    // the line's, where 1/H alone would be too small.
    const spread = inverse.mmul(gradientVariance(at)).mmul(inverse);
    covariance = Matrix.zeros(3, 3);
    for (let a = 0; a < free; a++) {
      for (let b = 0; b < free; b++) covariance.set(a, b, spread.get(a, b));
    }
    const length = Math.hypot(...move);
    const limit = Math.min(1, step / Math.max(length, 1e-12));
    const next = at.map((x, k) => k < free ? x - limit * move[k]! : x);
    // Only uphill: far from the top the curvature may have the wrong sign.
    if (!(value(next) >= value(at))) break;
    at = next;
    if (length < 1e-3) break;
  }
  const [vx_kms, vy_kms, gamma] = at as [number, number, number];
  const [cross, auto] = sumsAt(exact, vx_kms, vy_kms, gamma);
  const gain = signed([cross, auto]);
  const k_kms = Math.hypot(vx_kms, vy_kms);
  const along = (x: number, y: number) =>
    Math.sqrt(Math.max(
      0,
      x * x * covariance.get(0, 0) + 2 * x * y * covariance.get(0, 1) +
        y * y * covariance.get(1, 1),
    ));
  const noise_gain = -lowest;
  // V = γ + K sin 2π(φ − φ₀): Vy = K cos 2πφ₀, Vx = K sin 2πφ₀.
  const phase = Math.atan2(vx_kms, vy_kms) / (2 * Math.PI);
  return {
    vx_kms,
    vy_kms,
    systemic_kms: gamma,
    errors_kms: [0, 1, 2].map((k) => Math.sqrt(Math.max(0, covariance.get(k, k)))) as [
      number,
      number,
      number,
    ],
    k_kms,
    k_error_kms: k_kms > 0 ? along(vx_kms / k_kms, vy_kms / k_kms) : Infinity,
    crossing_phase: phase < 0 ? phase + 1 : phase,
    crossing_phase_error: k_kms > 0
      ? along(vy_kms / k_kms, -vx_kms / k_kms) / (2 * Math.PI * k_kms)
      : Infinity,
    gain,
    noise_gain,
    strength: auto > 0 ? cross / auto : 0,
    detected: gain >= 25 && gain >= 2 * noise_gain,
    map: { pixels, half_width_kms: half * step, gain: scan(gamma) },
  };
}

/** Gradient and Hessian of the first `free` coordinates by central differences. */
function curvature(
  value: (p: readonly number[]) => number,
  at: readonly number[],
  h: number,
  free: number,
) {
  const moved = (...steps: readonly [axis: number, by: number][]) => {
    const p = [...at];
    for (const [axis, by] of steps) p[axis]! += by;
    return value(p);
  };
  const middle = value(at);
  const gradient: number[] = [];
  const hessian = Matrix.zeros(free, free);
  for (let a = 0; a < free; a++) {
    const up = moved([a, h]), down = moved([a, -h]);
    gradient.push((up - down) / (2 * h));
    hessian.set(a, a, (up - 2 * middle + down) / (h * h));
    for (let b = 0; b < a; b++) {
      const mixed = (moved([a, h], [b, h]) - moved([a, h], [b, -h]) - moved([a, -h], [b, h]) +
        moved([a, -h], [b, -h])) / (4 * h * h);
      hessian.set(a, b, mixed);
      hessian.set(b, a, mixed);
    }
  }
  return { gradient, hessian };
}
