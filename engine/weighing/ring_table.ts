import { gaussLegendre } from "../numerics/mod.ts";
import { blurHalfAxis, blurReach } from "./blur_half_axis.ts";
import type { DiscHarmonics } from "./disc_harmonics.ts";

/**
 * Blurred profiles of rings of gas on a grid of velocity, at a grid of speeds: what a disc of any
 * radii and light is summed from. Between two speeds of the grid profiles are interpolated.
 */
export interface RingTable {
  /** Width of a bin, km/s; the first is centred on zero. */
  readonly step_kms: number;
  /** Number of bins of a blurred profile. */
  readonly bins: number;
  /** The same before blurring. */
  readonly sharp_bins: number;
  /** Highest harmonic, 0 to 2. */
  readonly orders: number;
  /** Standard deviation of the Gaussian by which profiles are blurred, km/s. */
  readonly sigma_kms: number;
  /** Rings that were made, by their place in the grid of speeds. */
  readonly rings: Map<number, Ring>;
}

/** Harmonics of one ring of unit light. */
export type Ring = DiscHarmonics;

/** Bins to a σ: cubic interpolation in velocity is then good to 5e-5 of a Gaussian's peak. */
const BINS_PER_SIGMA = 6;
/** Speeds to a σ where a ring's edge is within the grid: interpolated to 3e-4 of its peak. */
const SPEEDS_PER_SIGMA = 3;
/** Ratio of neighbouring speeds beyond the grid, where profiles change slowly. */
const SPEED_RATIO = 1.03;

/** Variance of the blur in bins²: a bin's own width is part of it. */
const VARIANCE = BINS_PER_SIGMA ** 2 - 1 / 12;

const rule = gaussLegendre(3);

/** An empty table. */
export function ringTable(
  { sigma_kms, reach_kms, orders }: {
    readonly sigma_kms: number;
    /** Bins go up to here before blurring. */
    readonly reach_kms: number;
    readonly orders: number;
  },
): RingTable {
  const step_kms = sigma_kms / BINS_PER_SIGMA;
  const sharp_bins = Math.ceil(reach_kms / step_kms) + 1;
  const bins = sharp_bins + blurReach(VARIANCE);
  return { step_kms, sharp_bins, bins, orders, sigma_kms, rings: new Map() };
}

/**
 * What each ring of the grid contributes to the integral of light(speed) × profile(speed) over a
 * range of speeds.
 */
export function ringWeights(
  table: RingTable,
  { from, to, light }: {
    readonly from: number;
    readonly to: number;
    /** Light per km/s of speed. */
    readonly light: (speed: number) => number;
  },
): { readonly ring: Ring; readonly weight: number }[] {
  let first = 1;
  while (speedAt(table, first + 1) <= from) first++;
  const weights: number[] = [];
  const speeds = [first - 1, first, first + 1, first + 2].map((k) => speedAt(table, k));
  for (let i = 0; speeds[1]! < to; i++) {
    const low = Math.max(from, speeds[1]!);
    const high = Math.min(to, speeds[2]!);
    const [a, b, c, d] = speeds as [number, number, number, number];
    for (let p = 0; p < rule.nodes.length; p++) {
      const s = low + (high - low) * (1 + rule.nodes[p]!) / 2;
      const amount = (high - low) / 2 * rule.weights[p]! * light(s);
      // Lagrange's polynomials of the four nearest.
      const shares = [
        (s - b) * (s - c) * (s - d) / ((a - b) * (a - c) * (a - d)),
        (s - a) * (s - c) * (s - d) / ((b - a) * (b - c) * (b - d)),
        (s - a) * (s - b) * (s - d) / ((c - a) * (c - b) * (c - d)),
        (s - a) * (s - b) * (s - c) / ((d - a) * (d - b) * (d - c)),
      ];
      for (let j = 0; j < 4; j++) weights[i + j] = (weights[i + j] ?? 0) + amount * shares[j]!;
    }
    speeds.shift();
    speeds.push(speedAt(table, first + i + 3));
  }
  return weights.map((weight, i) => ({ ring: ringAt(table, first - 1 + i), weight }));
}

/** Speeds at equal steps up to the end of the grid, at equal ratios beyond. */
function speedAt({ step_kms, sharp_bins, sigma_kms }: RingTable, number: number): number {
  const spacing = sigma_kms / SPEEDS_PER_SIGMA;
  const equal = Math.ceil(step_kms * sharp_bins / spacing);
  return (0.5 + Math.min(number, equal)) * spacing * SPEED_RATIO ** Math.max(0, number - equal);
}

function ringAt(table: RingTable, number: number): Ring {
  const known = table.rings.get(number);
  if (known !== undefined) return known;
  const sharp = sharpRing(table, speedAt(table, number));
  const made = {
    even0: blurHalfAxis(sharp.even0, { variance: VARIANCE, odd: false }),
    odd1: sharp.odd1.length === 0
      ? sharp.odd1
      : blurHalfAxis(sharp.odd1, { variance: VARIANCE, odd: true }),
    even2: sharp.even2.length === 0
      ? sharp.even2
      : blurHalfAxis(sharp.even2, { variance: VARIANCE, odd: false }),
  };
  table.rings.set(number, made);
  return made;
}

/**
 * One ring, bins being means over their width. Gas at angle ψ from the line of sight's normal moves
 * at s sin ψ, so a ring of speed s has the cumulative profiles asin(x), −√(1 − x²) and x√(1 − x²),
 * over π with x = v/s, for brightness 1, sin ψ and cos 2ψ; the others vanish by symmetry (Smak 1981,
 * Acta Astr. 31, 395, for the first).
 */
function sharpRing(
  { step_kms, sharp_bins: bins, orders }: RingTable,
  speed: number,
): Ring {
  const last = Math.min(bins - 1, Math.ceil(speed / step_kms + 0.5));
  const size = Math.min(bins, last + 2);
  const even0 = new Float64Array(size);
  const odd1 = new Float64Array(orders >= 1 ? size : 0);
  const even2 = new Float64Array(orders >= 2 ? size : 0);
  const light = 1 / (Math.PI * step_kms);
  const edge = (k: number) => (k - 0.5) * step_kms;
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
    if (orders >= 1) depositOdd(odd1, k, roots, half * (0.5 * (arcs - products) - place * roots));
    if (orders >= 2) {
      const cubes = light * (root ** 3 - nextRoot ** 3);
      depositEven(even2, k, products, half * (2 / 3 * cubes - roots - place * products));
    }
    x = y;
    root = nextRoot;
    arc = nextArc;
  }
  return { even0, odd1, even2 };
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
