import type { WeighingData } from "./weighing_data.ts";

/** A pattern by which every exposure may differ a little from the model, and by how much. */
export interface SoftDirection {
  /** The pattern, N values in units of the data: what an amplitude of one adds. */
  readonly pattern: Float64Array;
  /** Standard deviation of the amplitude from exposure to exposure. */
  readonly sigma: number;
}

/**
 * The linear map that makes the noise of the data white: samples over their errors, without the
 * part that a baseline can explain, and with the patterns of {@linkcode SoftDirection} weighed down.
 * Whatever a nuisance could do to an exposure, its whitened residual hardly shows.
 */
export interface Whitening {
  /** Whitens N values in units of the data into a new array. */
  readonly apply: (values: Float64Array) => Float64Array;
  /** Adds to each exposure's raw standardised residuals the share that the baseline explains. */
  readonly baseline: (values: Float64Array) => Float64Array;
  /** Σ ln(1 + σ²|p|²) over exposures and nuisances: what a likelihood charges for them. */
  readonly log_determinant: number;
  /** Sum over exposures of the parameters spent: baseline terms, and shares of soft amplitudes. */
  readonly parameters: number;
  /** Baseline terms alone: what whitened noise lacks. Along soft patterns it has unit variance. */
  readonly baseline_parameters: number;
  /** Takes from whitened values all that lies along soft patterns. */
  readonly bare: (values: Float64Array) => Float64Array;
}

/** Options of {@linkcode makeWhitening}. */
export interface WhiteningOptions {
  /**
   * Degree of the baseline in velocity, fitted freely to each exposure; −1 for none.
   *
   * @default {1}
   */
  readonly baseline_order?: number;
  /**
   * Light over continuum, N values, that the baseline multiplies: data were divided by it.
   *
   * @default 1 everywhere
   */
  readonly light?: Float64Array;
  /**
   * Patterns of nuisances with a prior.
   *
   * @default {[]}
   */
  readonly soft?: readonly SoftDirection[];
}

/** A unit vector per exposure, and the factor by which its projection is taken away. */
interface Direction {
  readonly unit: Float64Array;
  readonly removed: Float64Array;
}

/**
 * Makes the whitening of some data. A nuisance of known variance adds σ² p pᵀ to the covariance of
 * an exposure; its inverse square root takes 1 − 1/√(1 + σ²|p|²) of the projection on p away.
 *
 * @param data The data.
 * @param options Baseline and nuisances.
 * @returns The map.
 *
 * @example A slope in an exposure vanishes
 * ```ts
 * import { makeWhitening, simulateTrail, weighingData } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertLess } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const data = weighingData(simulateTrail({ parts: ["disc"] }, { binary, exposures: 5, seed: 1 }));
 * const white = makeWhitening(data).apply(data.sampling.velocity_kms.map((v) => 3 + v / 100));
 * assertLess(Math.max(...white.map(Math.abs)), 1e-6);
 * ```
 */
export function makeWhitening(data: WeighingData, options: WhiteningOptions = {}): Whitening {
  const { baseline_order = 1, light, soft = [] } = options;
  const { start, count, velocity_kms } = data.sampling;
  const weight = data.error.map((error) => 1 / error);
  const directions: Direction[] = [];
  let parameters = 0, log_determinant = 0;

  const project = (
    values: Float64Array,
    { unit, removed }: Pick<Direction, "unit"> & { readonly removed: ArrayLike<number> },
  ) => {
    for (let i = 0; i < count; i++) {
      const from = start[i]!, to = start[i + 1]!;
      let along = 0;
      for (let n = from; n < to; n++) along += unit[n]! * values[n]!;
      along *= removed[i]!;
      for (let n = from; n < to; n++) values[n]! -= along * unit[n]!;
    }
  };
  const whiten = (values: Float64Array) => {
    const white = new Float64Array(values.length);
    for (let n = 0; n < white.length; n++) white[n] = values[n]! * weight[n]!;
    for (const direction of directions) project(white, direction);
    return white;
  };
  const add = (pattern: Float64Array, share: (length: number) => readonly [number, number]) => {
    const unit = whiten(pattern);
    const removed = new Float64Array(count);
    for (let i = 0; i < count; i++) {
      let sum = 0, raw = 0;
      for (let n = start[i]!; n < start[i + 1]!; n++) {
        sum += unit[n]! * unit[n]!;
        raw += (pattern[n]! * weight[n]!) ** 2;
      }
      const length = Math.sqrt(sum);
      // What is left of a pattern that earlier ones explain is rounding.
      const [factor, spent] = sum > 1e-20 * raw ? share(length) : [0, 0];
      removed[i] = factor;
      parameters += spent;
      for (let n = start[i]!; n < start[i + 1]!; n++) {
        unit[n] = factor === 0 ? 0 : unit[n]! / length;
      }
    }
    directions.push({ unit, removed });
  };

  for (let order = 0; order <= baseline_order; order++) {
    add(
      velocity_kms.map((v, n) => (light?.[n] ?? 1) * (v / data.reach_kms) ** order),
      () => [1, 1],
    );
  }
  const baselines = directions.slice();
  const baseline_parameters = parameters;
  for (const { pattern, sigma } of soft) {
    if (!(sigma > 0)) continue;
    add(pattern, (length) => {
      const ratio = (sigma * length) ** 2;
      log_determinant += Math.log1p(ratio);
      return [1 - 1 / Math.sqrt(1 + ratio), ratio / (1 + ratio)];
    });
  }
  return {
    apply: whiten,
    baseline: (values) => {
      const left = values.slice();
      for (const direction of baselines) project(left, direction);
      return values.map((value, n) => value - left[n]!);
    },
    bare: (values) => {
      const left = values.slice();
      const whole = new Float64Array(count).fill(1);
      for (const { unit } of directions.slice(baselines.length)) {
        project(left, { unit, removed: whole });
      }
      return left;
    },
    log_determinant,
    parameters,
    baseline_parameters,
  };
}
