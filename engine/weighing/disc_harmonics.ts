import { gaussLegendre } from "../numerics/mod.ts";
import { radialLight } from "../synthesis/mod.ts";

/** A thin circular disc in velocity: all that its profile about the accretor depends on. */
export interface DiscInVelocity {
  /** Projected speed of rotation at the outer edge, km/s. */
  readonly rim_kms: number;
  /** Inner over outer radius. */
  readonly inner_over_outer: number;
  /** β of the emissivity r^−β. */
  readonly emissivity_index: number;
}

/**
 * Profiles of a disc whose surface brightness is 1, cos mθ or sin mθ, before blurring, on a grid of
 * velocity: means over bins of width `step_kms`, the first centred on zero.
 */
export interface DiscHarmonics {
  /** Width of a bin, km/s. */
  readonly step_kms: number;
  /** Share of light per km/s of the smooth disc; even in velocity. */
  readonly even0: Float64Array;
  /** The same weighted with sin ψ; odd. */
  readonly odd1: Float64Array;
  /** The same weighted with cos 2ψ; even. */
  readonly even2: Float64Array;
}

const POINTS = 8;
/** Widths of the radial panels: in the blurring Gaussian's σ, and relative to the speed. */
const PANEL_SIGMA = 6;
const PANEL_RATIO = 0.35;
const rule = gaussLegendre(POINTS);

/**
 * The harmonics of a disc. Gas at angle ψ from the line of sight's normal moves at s sin ψ, so a
 * ring of speed s has the cumulative profiles asin(x), −√(1 − x²) and x√(1 − x²), over π with
 * x = v/s, for brightness 1, sin ψ and cos 2ψ; the others vanish by symmetry (Smak 1981, Acta Astr.
 * 31, 395, for the first).
 */
export function discHarmonics(
  disc: DiscInVelocity,
  { step_kms, reach_kms, sigma_kms, orders }: {
    readonly step_kms: number;
    /** Bins go up to here. */
    readonly reach_kms: number;
    /** Standard deviation of the Gaussian that will blur the result. */
    readonly sigma_kms: number;
    /** Highest harmonic wanted, 0 to 2. */
    readonly orders: number;
  },
): DiscHarmonics {
  const { rim_kms, inner_over_outer, emissivity_index: beta } = disc;
  const bins = Math.ceil(reach_kms / step_kms) + 1;
  const even0 = new Float64Array(bins);
  const odd1 = new Float64Array(orders >= 1 ? bins : 0);
  const even2 = new Float64Array(orders >= 2 ? bins : 0);
  const fastest = rim_kms / Math.sqrt(inner_over_outer);
  const scale = 2 / rim_kms / radialLight([inner_over_outer, 1], beta);
  const edge = (k: number) => (k - 0.5) * step_kms;

  for (let low = rim_kms; low < fastest;) {
    const width = low < reach_kms ? PANEL_SIGMA * sigma_kms : PANEL_RATIO * low;
    const high = Math.min(fastest, low + width);
    for (let p = 0; p < POINTS; p++) {
      const speed = low + (high - low) * (1 + rule.nodes[p]!) / 2;
      // With r = u^−2 the light r^(1−β) dr is 2 u^(2β−5) du.
      const light = scale * (high - low) / 2 * rule.weights[p]! *
        (speed / rim_kms) ** (2 * beta - 5) / (Math.PI * step_kms);
      const last = Math.min(bins - 1, Math.ceil(speed / step_kms + 0.5));
      let x = edge(0) / speed;
      let root = Math.sqrt(Math.max(0, 1 - x * x));
      let arc = Math.asin(Math.max(-1, x));
      const half = speed / (2 * step_kms);
      for (let k = 0; k <= last; k++) {
        const y = Math.min(1, edge(k + 1) / speed);
        const nextRoot = Math.sqrt(1 - y * y);
        const nextArc = y === 1 ? Math.PI / 2 : Math.asin(y);
        const place = k * step_kms / speed;
        const arcs = light * (nextArc - arc);
        const roots = light * (root - nextRoot);
        const products = light * (y * nextRoot - x * root);
        depositEven(even0, k, arcs, half * (roots - place * arcs));
        if (orders >= 1) {
          depositOdd(odd1, k, roots, half * (0.5 * (arcs - products) - place * roots));
        }
        if (orders >= 2) {
          const cubes = light * (root ** 3 - nextRoot ** 3);
          depositEven(even2, k, products, half * (2 / 3 * cubes - roots - place * products));
        }
        x = y;
        root = nextRoot;
        arc = nextArc;
      }
    }
    low = high;
  }
  return { step_kms, even0, odd1, even2 };
}

// Light goes into its bin, and half its first moment (in bins) to either side, so that its mean is
// kept. Bin 0 is shared with the mirror image.
function depositEven(bins: Float64Array, k: number, light: number, halfMoment: number): void {
  bins[k]! += light;
  if (k === 0) return;
  if (k + 1 < bins.length) bins[k + 1]! += halfMoment;
  bins[k - 1]! -= k === 1 ? 2 * halfMoment : halfMoment;
}

function depositOdd(bins: Float64Array, k: number, light: number, halfMoment: number): void {
  bins[k]! += light;
  if (k + 1 < bins.length) bins[k + 1]! += halfMoment;
  if (k > 1) bins[k - 1]! -= halfMoment;
}

/**
 * A harmonic blurred with a Gaussian, on the whole axis: values at (k − half) · step for k from 0 to
 * 2 half.
 */
export function blurHarmonic(
  values: Float64Array,
  { sigma_bins, odd }: { readonly sigma_bins: number; readonly odd: boolean },
): { readonly half: number; readonly values: Float64Array } {
  const reach = Math.ceil(5.5 * sigma_bins);
  const weights = Float64Array.from(
    { length: reach + 1 },
    (_, j) => Math.exp(-0.5 * (j / sigma_bins) ** 2),
  );
  const total = weights.reduce((sum, w, j) => sum + (j === 0 ? w : 2 * w), 0);
  for (let j = 0; j <= reach; j++) weights[j]! /= total;

  const inner = values.length - 1;
  const half = inner + reach;
  const blurred = new Float64Array(2 * half + 1);
  // The positive side of the kernel's output from both signs of the input.
  for (let k = -inner; k <= inner; k++) {
    const value = k < 0 ? (odd ? -values[-k]! : values[-k]!) : values[k]!;
    if (value === 0) continue;
    for (let j = Math.max(-reach, -k); j <= reach; j++) {
      blurred[half + k + j]! += value * weights[j < 0 ? -j : j]!;
    }
  }
  for (let k = 1; k <= half; k++) {
    blurred[half - k] = odd ? -blurred[half + k]! : blurred[half + k]!;
  }
  if (odd) blurred[half] = 0;
  return { half, values: blurred };
}
