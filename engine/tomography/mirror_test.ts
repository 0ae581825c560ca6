import { CholeskyDecomposition, Matrix } from "ml-matrix";
import { chiSquareTail } from "../numerics/mod.ts";
import type { TrailSamples } from "./check_trail.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";

/** A cell of the trail that departs from what any map can make. */
export interface WorstCell {
  /** Phase of the middle of the cell, cycles. */
  readonly phase: number;
  /** Velocity of the middle of the cell, from the systemic velocity, km/s. */
  readonly velocity_kms: number;
  /** By how many standard deviations. */
  readonly sigma: number;
}

/** Result of {@linkcode mirrorTest}. */
export interface MirrorTest {
  /** Probability of so large a chi-square if a fixed map made the data. */
  readonly p_value: number;
  /** Chi-square of the antisymmetric part in cells of velocity and phase. */
  readonly chi_square: number;
  /** Number of cells. */
  readonly degrees_of_freedom: number;
  /** Number of pairs of exposures half an orbit apart. */
  readonly pairs: number;
  /** The cell that departs most. */
  readonly worst: WorstCell;
}

/** Options of {@linkcode mirrorTest}. */
export interface MirrorTestOptions {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /** Half the range of velocities that counts, km/s. */
  readonly half_range_kms: number;
  /** Model of a map that fits the data, laid out as they are: it takes up what phases do not match. */
  readonly model: Float64Array;
  /**
   * Largest difference from half an orbit between two exposures of a pair, cycles.
   *
   * @default {0.03}
   */
  readonly tolerance?: number;
  /**
   * Error of each exposure's continuum level, relative; P values. It multiplies line and continuum, so
   * that all cells of an exposure are off together.
   *
   * @default {none}
   */
  readonly continuum_error?: Float64Array | null;
  /**
   * Share of chi-square that making the model left over, from simulations.
   *
   * @default {1}
   */
  readonly left?: number;
}

/** Width of a cell in σ of the profile, and in cycles. */
const CELL_SIGMAS = 4, CELL_CYCLES = 1 / 24;

/**
 * Tests whether profiles half an orbit apart mirror one another about γ, as those of transparent gas at
 * rest in the map do. What a map cannot make is the part of the data that is antisymmetric under
 * (v, φ) → (−v, φ + ½); no fit of a map takes any of it up, so the model only has to bridge the
 * mismatch in phase. Modulated emission fails here.
 *
 * @param trail Exposures, data, errors.
 * @param options Systemic velocity, range, model.
 * @returns Probability and the worst cell; null with fewer than three pairs.
 *
 * @example
 * ```ts
 * import { mirrorTest } from "@millrace/millrace/tomography";
 * import { assert } from "@std/assert";
 *
 * const count = 20, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const flux = sampling.velocity_kms.map((v) => v > 100 ? 0.1 : 0); // always red: nothing mirrors it
 * const trail = { sampling, flux, error: flux.map(() => 0.05) };
 * const test = mirrorTest(trail, {
 *   systemic_kms: 0,
 *   half_range_kms: 500,
 *   model: flux.map(() => 0),
 * });
 * assert(test !== null && test.p_value < 1e-6 && test.worst.velocity_kms !== 0);
 * ```
 */
export function mirrorTest(trail: TrailSamples, options: MirrorTestOptions): MirrorTest | null {
  const { half_range_kms, left = 1 } = options;
  const found = antisymmetricCells(trail, options);
  if (found === null) return null;
  const { value, variance, levels, cells, groups, pairs } = found;
  const whole = variance.slice();
  for (const { group, off } of levels) {
    off.forEach((o, c) => whole[group * cells + c] = whole[group * cells + c]! + o * o);
  }
  let chi_square = 0, degrees_of_freedom = 0, worst = 0, most = 0;
  value.forEach((d, at) => {
    if (!(variance[at]! < Infinity)) return;
    chi_square += d * d / variance[at]!;
    degrees_of_freedom++;
    const z = d / Math.sqrt(left * whole[at]!);
    if (Math.abs(z) > Math.abs(most)) [worst, most] = [at, z];
  });
  for (let group = 0; group < groups; group++) chi_square -= explainedByLevels(found, group);
  chi_square /= left;
  if (degrees_of_freedom === 0) return null;
  return {
    p_value: chiSquareTail(chi_square, degrees_of_freedom),
    chi_square,
    degrees_of_freedom,
    pairs,
    worst: {
      phase: (Math.floor(worst / cells) + 0.5) * 0.5 / groups,
      velocity_kms: (worst % cells + 0.5 - 0.5 * cells) * 2 * half_range_kms / cells,
      sigma: most,
    },
  };
}

/** What errors of the continuum's levels take off the chi-square of a group (Woodbury 1950, Princeton Memo. 42). */
function explainedByLevels(found: AntisymmetricCells, group: number): number {
  const { value, variance, cells } = found;
  const levels = found.levels.filter((level) => level.group === group);
  if (levels.length === 0) return 0;
  const over = (a: (c: number) => number, b: (c: number) => number) => {
    let sum = 0;
    for (let c = 0; c < cells; c++) {
      const v = variance[group * cells + c]!;
      if (v < Infinity) sum += a(c) * b(c) / v;
    }
    return sum;
  };
  const size = levels.length;
  const inner = Matrix.eye(size);
  levels.forEach((one, i) => {
    levels.forEach((other, j) => {
      inner.set(i, j, inner.get(i, j) + over((c) => one.off[c]!, (c) => other.off[c]!));
    });
  });
  const along = Matrix.columnVector(
    levels.map(({ off }) => over((c) => off[c]!, (c) => value[group * cells + c]!)),
  );
  const solved = new CholeskyDecomposition(inner).solve(along);
  return along.transpose().mmul(solved).get(0, 0);
}

/** Differences between profiles and their mirror images half an orbit later, in cells. */
export interface AntisymmetricCells {
  /** Mean difference in each cell, groups × cells row-major. */
  readonly value: Float64Array;
  /** Its variance from the errors of the samples; Infinity where there is none. */
  readonly variance: Float64Array;
  /**
   * What an error of the continuum's level of one exposure, one standard deviation, moves the cells of a
   * group by: the covariance has the sum of their outer products beside the variance.
   */
  readonly levels: readonly { readonly group: number; readonly off: Float64Array }[];
  /** Number of cells of velocity. */
  readonly cells: number;
  /** Number of groups of phase in the half orbit. */
  readonly groups: number;
  /** Number of pairs of exposures. */
  readonly pairs: number;
}

/**
 * The part of the data less a model that is antisymmetric under (v, φ) → (−v, φ + ½), averaged over
 * cells of velocity and phase: no fixed map reaches it.
 *
 * @param trail Exposures, data, errors.
 * @param options Systemic velocity, range, model.
 * @returns The differences; null with fewer than three pairs of exposures half an orbit apart.
 *
 * @example
 * ```ts
 * import { antisymmetricCells } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 2,
 *   phase: Float64Array.of(0.1, 0.6),
 *   cycle: new Float64Array(2),
 *   phase_width: new Float64Array(2),
 *   start: Uint32Array.of(0, 1, 2),
 *   velocity_kms: new Float64Array(2),
 *   pixel_kms: new Float64Array(2).fill(20),
 *   profile_sigma_kms: new Float64Array(2).fill(40),
 * };
 * const flux = new Float64Array(2);
 * const trail = { sampling, flux, error: flux.map(() => 1) };
 * const found = antisymmetricCells(trail, { systemic_kms: 0, half_range_kms: 100, model: flux });
 * assertEquals(found, null); // one pair is too few
 * ```
 */
export function antisymmetricCells(
  trail: TrailSamples,
  options: Omit<MirrorTestOptions, "left">,
): AntisymmetricCells | null {
  const { half_range_kms, tolerance = 0.03, continuum_error = null } = options;
  const { sampling } = trail;
  const pairs = pairsOf(sampling.phase, tolerance);
  if (pairs.length < 3) return null;
  const widest = sampling.profile_sigma_kms.reduce((a, b) => Math.max(a, b), 0);
  const cells = Math.max(2, 2 * Math.ceil(half_range_kms / (CELL_SIGMAS * widest)));
  const binned = binResiduals(trail, { ...options, cells });

  const groups = Math.round(0.5 / CELL_CYCLES);
  const sum = new Float64Array(groups * cells), weight = new Float64Array(groups * cells);
  const levels: { group: number; off: Float64Array }[] = [];
  for (const { first, second, phase } of pairs) {
    const group = Math.min(groups - 1, Math.floor(phase * 2 * groups));
    const [one, two] = [first, second].map((exposure) => ({
      scale: continuum_error?.[exposure] ?? 0,
      off: new Float64Array(cells),
    })) as [Level, Level];
    for (let c = 0; c < cells; c++) {
      const a = first * cells + c, b = second * cells + (cells - 1 - c);
      const together = binned.variance[a]! + binned.variance[b]!;
      if (!(together < Infinity)) continue;
      const at = group * cells + c;
      sum[at] = sum[at]! + (binned.mean[a]! - binned.mean[b]!) / together;
      weight[at] = weight[at]! + 1 / together;
      one.off[c] = one.scale * binned.light[a]! / together;
      two.off[c] = -two.scale * binned.light[b]! / together;
    }
    for (const { scale, off } of [one, two]) if (scale > 0) levels.push({ group, off });
  }
  for (const { group, off } of levels) {
    off.forEach((o, c) => off[c] = o === 0 ? 0 : o / weight[group * cells + c]!);
  }
  return {
    value: sum.map((s, at) => weight[at]! > 0 ? s / weight[at]! : 0),
    variance: weight.map((w) => w > 0 ? 1 / w : Infinity),
    levels,
    cells,
    groups,
    pairs: pairs.length,
  };
}

interface Level {
  readonly scale: number;
  readonly off: Float64Array;
}

interface Pair {
  readonly first: number;
  readonly second: number;
  /** Phase of the first, in [0, ½). */
  readonly phase: number;
}

/** Pairs half an orbit apart, closest first, every exposure at most once. */
function pairsOf(phase: Float64Array, tolerance: number): Pair[] {
  const candidates: (Pair & { readonly off: number })[] = [];
  phase.forEach((p, first) => {
    if (p >= 0.5) return;
    phase.forEach((q, second) => {
      const off = Math.abs(q - p - 0.5);
      const wrapped = Math.min(off, 1 - off);
      if (second !== first && wrapped <= tolerance) {
        candidates.push({ first, second, phase: p, off: wrapped });
      }
    });
  });
  candidates.sort((a, b) => a.off - b.off || a.first - b.first || a.second - b.second);
  const used = new Set<number>();
  return candidates.filter(({ first, second }) => {
    if (used.has(first) || used.has(second)) return false;
    used.add(first).add(second);
    return true;
  });
}

function binResiduals(
  trail: TrailSamples,
  options: MirrorTestOptions & { readonly cells: number },
): { mean: Float64Array; variance: Float64Array; light: Float64Array } {
  const { sampling, flux, error } = trail;
  const { cells, half_range_kms, systemic_kms, model } = options;
  const velocity = shiftVelocities(sampling.velocity_kms, systemFrame(systemic_kms));
  const sum = new Float64Array(sampling.count * cells);
  const weight = new Float64Array(sampling.count * cells);
  const light = new Float64Array(sampling.count * cells);
  for (let i = 0; i < sampling.count; i++) {
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!(error[k]! < Infinity)) continue;
      // Counted outwards on either side, so that a sample and its mirror image share a cell's fate.
      const out = Math.floor(Math.abs(velocity[k]!) / half_range_kms * 0.5 * cells);
      if (out >= 0.5 * cells || velocity[k] === 0) continue;
      const cell = velocity[k]! > 0 ? 0.5 * cells + out : 0.5 * cells - 1 - out;
      const w = 1 / error[k]! ** 2;
      const at = i * cells + cell;
      sum[at] = sum[at]! + w * (flux[k]! - model[k]!);
      weight[at] = weight[at]! + w;
      light[at] = light[at]! + w * (1 + model[k]!);
    }
  }
  const mean = (sums: Float64Array) => sums.map((s, at) => weight[at]! > 0 ? s / weight[at]! : 0);
  return {
    mean: mean(sum),
    light: mean(light),
    variance: weight.map((w) => w > 0 ? 1 / w : Infinity),
  };
}
