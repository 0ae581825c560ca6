import { runningMedian } from "../spectra/mod.ts";
import { runningMaximum } from "./running_maximum.ts";
import { sharpness } from "./sharpness.ts";

/** One exposure as the search for cosmic rays sees it. */
export interface TrailRow {
  /** Pixel centres, N values, km/s, increasing. */
  readonly velocity_kms: Float64Array;
  /** Normalised flux, N values. */
  readonly flux: Float64Array;
  /** One standard deviation, N values; infinite where masked. */
  readonly error: Float64Array;
  /** Orbits since the zero at mid-exposure: cycle plus phase. */
  readonly orbit: number;
  /** Full width at half maximum of the instrumental profile, pixels. */
  readonly profile_pixels: number;
  /** Set-up: rows are compared with rows of their own set-up where there are enough. */
  readonly group: number;
}

/** Options of {@linkcode findCosmicRays}. */
export interface CosmicRayOptions {
  /** Largest speed of orbital motion that a real feature may have, km/s. */
  readonly largest_speed_kms: number;
  /**
   * Excess that marks a cosmic ray, standard deviations.
   * @default 6
   */
  readonly threshold?: number;
  /**
   * Rows further off than this are no neighbours, orbits.
   * @default 0.15
   */
  readonly reach_orbits?: number;
}

/** What was found by {@linkcode findCosmicRays}. */
export interface CosmicRays {
  /** For every row, 1 where a pixel was hit. */
  readonly hit: readonly Uint8Array[];
  /** Pixels hit. */
  readonly count: number;
  /** Indices of rows that had fewer than two neighbours: they were not searched. */
  readonly unsearched: readonly number[];
  /** Indices of rows that differ from their neighbours too broadly to be searched. */
  readonly unlike: readonly number[];
}

const NEIGHBOURS = 4;
/** A real feature may be this much stronger than in every neighbour before it is suspect. */
const GROWTH = 1.5;

function apart(a: number, b: number): number {
  const d = a - b;
  return Math.abs(d - Math.round(d));
}

// Exposures near in time come first: between nights an object may change. Only where fewer than two
// are near in time do those near in phase stand in.
function neighboursOf(rows: readonly TrailRow[], index: number, reach: number): number[] {
  const row = rows[index]!;
  const nearest = (distance: (other: TrailRow) => number) =>
    Array.from(rows.keys())
      .filter((k) => k !== index && distance(rows[k]!) <= reach)
      .sort((a, b) => distance(rows[a]!) - distance(rows[b]!));
  const inTime = nearest((other) => Math.abs(other.orbit - row.orbit));
  const inPhase = nearest((other) => apart(other.orbit, row.orbit));
  const alike = (indices: readonly number[]) => indices.filter((k) => rows[k]!.group === row.group);
  const choices = [alike(inTime), inTime, alike(inPhase), inPhase];
  return (choices.find((choice) => choice.length >= 2) ?? inPhase).slice(0, NEIGHBOURS);
}

// The row's own level beside a pixel: over a window wider than an unresolved feature.
function besideLevel(row: TrailRow): Float64Array {
  const half = Math.ceil(1.5 * row.profile_pixels) + 2;
  return runningMedian(row.flux, row.error, { half, own: false });
}

// A hit's own error holds its own photons: the typical error beside it is the fair one.
function typicalError(row: TrailRow): Float64Array {
  const near = runningMedian(row.error, row.error, { half: 10 });
  return near.map((e, i) => Number.isNaN(e) ? row.error[i]! : Math.min(e, row.error[i]!));
}

// A hit fills a pixel, or two; three where the spectrum was resampled.
const RUNS = [1, 2, 3] as const;

// Pixels in runs that are sharper than the instrument draws, and sharper than anything in the neighbours:
// if the resolution is better than stated, they show it too.
function tooSharp(
  row: TrailRow,
  near: readonly TrailRow[],
  options: { readonly level: Float64Array; readonly speed: number; readonly threshold: number },
): number[] {
  const { level, speed, threshold } = options;
  return RUNS.flatMap((pixels) => {
    const own = sharpness(row, { pixels, error: level });
    if (!own.excess.some((e, i) => e > threshold * own.sigma[i]!)) return [];
    const theirs = near.map((other): TrailRow => ({
      ...other,
      flux: sharpness(other, { pixels, error: other.error }).excess,
    }));
    const top = envelope(row, theirs, speed);
    return [...own.excess.keys()].flatMap((i) => {
      const excess = own.excess[i]! - GROWTH * Math.max(0, top[i]!);
      if (!(excess > threshold * own.sigma[i]!)) return [];
      const beside = Math.max(row.flux[i - 1]!, row.flux[i + pixels]!);
      return Array.from({ length: pixels }, (_, k) => i + k)
        .filter((k) => row.flux[k]! - beside > threshold / 2 * level[k]!);
    });
  });
}

// The highest flux that a neighbour shows within reach of motion. With three neighbours or more the
// second highest of them: one may be hit itself, while a real feature is in two.
function envelope(row: TrailRow, neighbours: readonly TrailRow[], speed: number): Float64Array {
  const top = new Float64Array(row.flux.length).fill(-Infinity);
  const second = top.slice();
  const pixel = (row.velocity_kms.at(-1)! - row.velocity_kms[0]!) / row.flux.length;
  for (const other of neighbours) {
    const drift = 2 * Math.PI * speed * apart(other.orbit, row.orbit) + 1.5 * pixel;
    const most = runningMaximum(other, row.velocity_kms, drift);
    for (let i = 0; i < top.length; i++) {
      second[i] = Math.max(second[i]!, Math.min(top[i]!, most[i]!));
      top[i] = Math.max(top[i]!, most[i]!);
    }
  }
  return neighbours.length < 3 ? top : second.map((s, i) => s > -Infinity ? s : top[i]!);
}

/**
 * Finds cosmic rays in a trail by comparing each pixel with neighbouring exposures, and with its own
 * row. A pixel is hit when it stands out of its row over an unresolved feature's width *and* above
 * what two of the four exposures nearest in time (or, for want of those, in phase) show within the velocities that a real feature
 * could have crossed meanwhile (2π × speed × difference of phase). A narrow S-wave is in the
 * neighbours, only shifted, so it stays; it may also brighten by half from one exposure to the next.
 * On the flanks of the line, where that allows much, a run of one to three pixels is hit as well when
 * it is sharper than the instrument draws anything ({@linkcode sharpness}) and sharper than all that
 * the neighbours show. Pixels beside a hit go with it at half the threshold. Repeated until nothing
 * is found, so that hits in neighbours do not hide each other.
 *
 * @param rows Normalised exposures, at least three for anything to be found.
 * @param options Speed, threshold, reach in phase.
 * @returns The hits. Rows of which more than one pixel in twenty stands out are left alone: they
 * differ from their neighbours as a whole (eclipse, flare), and are named in `unlike`.
 *
 * @example
 * ```ts
 * import { findCosmicRays } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 41 }, (_, i) => 50 * (i - 20));
 * const rows = [0.1, 0.12, 0.14, 0.16].map((orbit, k) => ({
 *   velocity_kms,
 *   flux: velocity_kms.map((_, i) => k === 1 && i === 10 ? 5 : 0),
 *   error: velocity_kms.map(() => 0.1),
 *   orbit,
 *   profile_pixels: 2,
 *   group: 0,
 * }));
 * const { hit, count } = findCosmicRays(rows, { largest_speed_kms: 500 });
 * assertEquals([count, hit[1]![10]], [1, 1]);
 * ```
 */
export function findCosmicRays(
  rows: readonly TrailRow[],
  options: CosmicRayOptions,
): CosmicRays {
  const { largest_speed_kms, threshold = 6, reach_orbits = 0.15 } = options;
  const hit = rows.map((row) => new Uint8Array(row.flux.length));
  const neighbours = rows.map((_, i) => neighboursOf(rows, i, reach_orbits));
  const unsearched = Array.from(rows.keys()).filter((i) => neighbours[i]!.length < 2);
  const unlike = new Set<number>();
  const clean = rows.map((row) => ({ ...row, error: row.error.slice() }));
  const level = rows.map(typicalError);
  let changed = new Set(rows.keys());

  for (let pass = 0; pass < 4; pass++) {
    const found = clean.map((row, index) => {
      if (neighbours[index]!.length < 2 || unlike.has(index)) return [];
      if (!changed.has(index) && !neighbours[index]!.some((k) => changed.has(k))) return [];
      const near = neighbours[index]!.map((k) => clean[k]!);
      const top = envelope(row, near, largest_speed_kms);
      const base = besideLevel(row);
      const sigma = level[index]!;
      const excess = row.flux.map((f, i) => {
        if (!Number.isFinite(row.error[i]!) || !Number.isFinite(top[i]!)) return -Infinity;
        const allowed = base[i]! + GROWTH * Math.max(0, top[i]! - base[i]!);
        return Math.min(f - allowed, f - base[i]!) / sigma[i]!;
      });
      const core = Array.from(excess.keys()).filter((i) => excess[i]! > threshold);
      const all = new Set(core);
      const sharp = { level: sigma, speed: largest_speed_kms, threshold };
      for (const i of tooSharp(row, near, sharp)) all.add(i);
      for (const i of core) {
        for (const k of [i - 1, i + 1]) if (excess[k]! > threshold / 2) all.add(k);
      }
      return [...all];
    });
    changed = new Set();
    found.forEach((pixels, index) => {
      if (pixels.length > Math.max(3, 0.05 * clean[index]!.flux.length)) {
        unlike.add(index);
        return;
      }
      if (pixels.length > 0) changed.add(index);
      for (const i of pixels) {
        hit[index]![i] = 1;
        clean[index]!.error[i] = Infinity;
      }
    });
    if (changed.size === 0) break;
  }
  const count = hit.reduce((sum, row) => sum + row.reduce((s, h) => s + h, 0), 0);
  return { hit, count, unsearched, unlike: [...unlike].sort((a, b) => a - b) };
}
