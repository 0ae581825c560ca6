import { gaussLegendre } from "../numerics/mod.ts";
import type { DiscHarmonics } from "./disc_harmonics.ts";

/**
 * Profiles of rings of gas on a grid of velocity, kept by the ring's speed: what a disc of any radii
 * and light is summed from.
 */
export interface RingTable {
  /** Width of a bin, km/s; the first is centred on zero. */
  readonly step_kms: number;
  /** Number of bins. */
  readonly bins: number;
  /** Highest harmonic, 0 to 2. */
  readonly orders: number;
  /** Standard deviation of the Gaussian that will blur the result, km/s. */
  readonly sigma_kms: number;
  /** Rings of whole panels of speed, by the panel's number. */
  readonly panels: Map<number, readonly WeighedRing[]>;
}

/** Harmonics of one ring of unit light. */
export interface Ring {
  /** Of unit brightness: share of light per km/s. */
  readonly even0: Float64Array;
  /** Of brightness sin ψ. */
  readonly odd1: Float64Array;
  /** Of brightness cos 2ψ. */
  readonly even2: Float64Array;
}

/** A ring that stands for a range of speeds. */
export interface WeighedRing {
  /** The ring. */
  readonly ring: Ring;
  /** Its speed of rotation, km/s. */
  readonly speed_kms: number;
  /** Width of the range, km/s. */
  readonly weight_kms: number;
}

const POINTS = 8;
/** Widths of the panels of speed: in the blurring Gaussian's σ, and beyond the grid relative to the speed. */
const PANEL_SIGMA = 6;
const PANEL_RATIO = 0.35;
const rule = gaussLegendre(POINTS);

/** An empty table. */
export function ringTable(
  { step_kms, reach_kms, sigma_kms, orders }: {
    readonly step_kms: number;
    /** Bins go up to here. */
    readonly reach_kms: number;
    readonly sigma_kms: number;
    readonly orders: number;
  },
): RingTable {
  const bins = Math.ceil(reach_kms / step_kms) + 1;
  return { step_kms, bins, orders, sigma_kms, panels: new Map() };
}

/**
 * Rings for integrating over a range of speeds (Gauss & Legendre, panel by panel). Those of panels
 * that the range covers whole are made once; of the two at its ends they are made for it.
 */
export function ringsBetween(
  table: RingTable,
  [slowest, fastest]: readonly [number, number],
): readonly WeighedRing[] {
  const found: WeighedRing[] = [];
  for (let number = panelAt(table, slowest); panelEdge(table, number) < fastest; number++) {
    const low = panelEdge(table, number), high = panelEdge(table, number + 1);
    if (low >= slowest && high <= fastest) {
      const kept = table.panels.get(number) ?? ringsOf(table, [low, high]);
      table.panels.set(number, kept);
      found.push(...kept);
    } else {
      found.push(...ringsOf(table, [Math.max(low, slowest), Math.min(high, fastest)]));
    }
  }
  return found;
}

/** Adds a ring's harmonics, times a factor. */
export function addRing(into: DiscHarmonics, ring: Ring, factor: number): void {
  for (const key of ["even0", "odd1", "even2"] as const) {
    const sum = into[key], values = ring[key];
    for (let k = 0; k < values.length; k++) sum[k]! += factor * values[k]!;
  }
}

/** Panels of equal width up to the end of the grid; of equal ratio beyond. */
function panelEdge({ step_kms, bins, sigma_kms }: RingTable, number: number): number {
  const width = PANEL_SIGMA * sigma_kms;
  const equal = Math.ceil(step_kms * bins / width);
  return number <= equal ? number * width : equal * width * (1 + PANEL_RATIO) ** (number - equal);
}

function panelAt(table: RingTable, speed: number): number {
  let number = 0;
  while (panelEdge(table, number + 1) <= speed) number++;
  return number;
}

function ringsOf(
  table: RingTable,
  [low, high]: readonly [number, number],
): readonly WeighedRing[] {
  return Array.from({ length: POINTS }, (_, p) => {
    const speed_kms = low + (high - low) * (1 + rule.nodes[p]!) / 2;
    const weight_kms = (high - low) / 2 * rule.weights[p]!;
    return { ring: ringAt(table, speed_kms), speed_kms, weight_kms };
  });
}

/**
 * One ring, bins being means over their width. Gas at angle ψ from the line of sight's normal moves
 * at s sin ψ, so a ring of speed s has the cumulative profiles asin(x), −√(1 − x²) and x√(1 − x²),
 * over π with x = v/s, for brightness 1, sin ψ and cos 2ψ; the others vanish by symmetry (Smak 1981,
 * Acta Astr. 31, 395, for the first).
 */
function ringAt({ step_kms, bins, orders }: RingTable, speed: number): Ring {
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
