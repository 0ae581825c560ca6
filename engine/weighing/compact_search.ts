import { randomStream } from "../numerics/mod.ts";
import { cholesky, dot, productsOf, solveLower, solveUpper } from "./brightnesses.ts";
import { type CompactSource, compactTrail } from "./compact_trail.ts";
import type { FitErrors } from "./fit_errors.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import { lineOf } from "./line_of.ts";
import { addNoise, drawNoise } from "./draw_noise.ts";
import type { NoiseBank } from "./noise_bank.ts";
import type { Problem } from "./problem.ts";
import type { Steps } from "./work_in_steps.ts";

/** A square of places in the map. */
export interface SearchGrid {
  /** Places along each side, odd. */
  readonly cells: number;
  /** Velocity of the outermost places, km/s. */
  readonly half_width_kms: number;
}

/** Everything that a fitted model can do to first order, to be taken away from data and sources. */
export interface Tangent {
  /** What of a whitened trail no change of the fitted numbers or amplitudes can make. */
  readonly without: (white: Float64Array) => Float64Array;
}

/** The tangent space of a fit: its amplitudes and its numbers. */
export function tangentOf(errors: FitErrors): Tangent {
  const columns = errors.derivatives.filter((column) => column !== null);
  const empty = new Float64Array(columns[0]?.length ?? 0);
  const { gram, size } = productsOf(columns, empty);
  const lower = cholesky(gram, size);
  return {
    without(white) {
      const shares = solveUpper(lower, solveLower(lower, columns.map((c) => dot(c, white))));
      const left = white.slice();
      columns.forEach((column, j) => {
        const share = shares[j]!;
        for (let n = 0; n < left.length; n++) left[n]! -= share * column[n]!;
      });
      return left;
    },
  };
}

/** A source at one place, as a search sees it. */
export interface SearchCell {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** Signal to noise of a source of unit equivalent width, everything else fitted. */
  readonly strength: number;
  /** The matched filter: its product with whitened data is a signal to noise. */
  readonly filter: Float64Array;
}

/** Options of the cells of a search. */
export interface SearchOptions {
  /** The places. */
  readonly grid: SearchGrid;
  /** Standard deviation of the source's own velocities, km/s. */
  readonly sigma_kms: number;
  /** The fit that the source would be added to. */
  readonly fit: HypothesisFit;
  /** What that fit can absorb. */
  readonly tangent: Tangent;
}

/** The matched filter of each place; rows of increasing Vy, columns of increasing Vx. */
export function* searchCells(problem: Problem, options: SearchOptions): Steps<SearchCell[]> {
  const { cells, half_width_kms } = options.grid;
  const step = 2 * half_width_kms / (cells - 1);
  const found: SearchCell[] = [];
  for (let k = 0; k < cells * cells; k++) {
    if (k % cells === 0) yield;
    const source = {
      vx_kms: (k % cells) * step - half_width_kms,
      vy_kms: Math.floor(k / cells) * step - half_width_kms,
      sigma_kms: options.sigma_kms,
    };
    found.push(searchCell(problem, { ...options, source }));
  }
  return found;
}

const TRIALS_IN_STEP = 20;
/** Steps by which place (km/s) and width (relative) are changed for derivatives. */
const STEP_KMS = 5;
const STEP_WIDTH = 0.1;

/**
 * Directions in which a source's trail changes with its place and width, of unit length and at right
 * angles to its matched filter and to each other: noise along them is what fitting place and width
 * gains.
 */
export function refitDirections(
  problem: Problem,
  { cell, sigma_kms, fit, tangent }: Pick<SearchOptions, "fit" | "tangent" | "sigma_kms"> & {
    readonly cell: SearchCell;
  },
): Float64Array[] {
  const { vx_kms, vy_kms, strength, filter } = cell;
  const changed = [
    { vx_kms: vx_kms + STEP_KMS, vy_kms, sigma_kms },
    { vx_kms, vy_kms: vy_kms + STEP_KMS, sigma_kms },
    { vx_kms, vy_kms, sigma_kms: sigma_kms * (1 + STEP_WIDTH) },
  ];
  const directions: Float64Array[] = [];
  for (const source of changed) {
    const there = searchCell(problem, { source, fit, tangent });
    const change = there.filter.map((value, n) => there.strength * value - strength * filter[n]!);
    for (const other of [filter, ...directions]) {
      const along = dot(change, other);
      for (let n = 0; n < change.length; n++) change[n]! -= along * other[n]!;
    }
    const length = Math.sqrt(dot(change, change));
    if (length > 0) directions.push(change.map((value) => value / length));
  }
  return directions;
}

/** The matched filter of one place. */
export function searchCell(
  problem: Problem,
  { source, fit, tangent }: Pick<SearchOptions, "fit" | "tangent"> & {
    readonly source: CompactSource;
  },
): SearchCell {
  const { systemic_kms, phase } = fit.state;
  const { sampling } = problem.data;
  const filter = tangent.without(
    problem.whitening.apply(compactTrail(source, { sampling, systemic_kms, phase })),
  );
  const strength = Math.sqrt(dot(filter, filter));
  for (let n = 0; n < filter.length; n++) filter[n]! /= strength || 1;
  return { vx_kms: source.vx_kms, vy_kms: source.vy_kms, strength, filter };
}

/**
 * Whitened noise of trials of a fitted model, flickering included, without what the model absorbs.
 */
export function* searchNoise(
  problem: Problem,
  { fit, bank, tangent, trials, seed }: {
    readonly fit: HypothesisFit;
    readonly bank: NoiseBank;
    readonly tangent: Tangent;
    readonly trials: number;
    readonly seed: number;
  },
): Steps<Float64Array[]> {
  const { data } = problem;
  const line = lineOf(problem, fit);
  const found: Float64Array[] = [];
  for (let k = 0; k < trials; k++) {
    if (k % TRIALS_IN_STEP === 0) yield;
    const drawn = drawNoise(bank, { data, random: randomStream(seed, k) });
    const noise = addNoise(line, { data, noise: drawn }).map((value, n) => value - line[n]!);
    found.push(tangent.without(problem.whitening.apply(noise)));
  }
  return found;
}
