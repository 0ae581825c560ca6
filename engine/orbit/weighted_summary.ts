/** A quantity from weighted draws. */
export interface DrawSummary {
  /** Median. */
  readonly median: number;
  /** Median less the 15.87 % quantile. */
  readonly error_low: number;
  /** The 84.13 % quantile less the median. */
  readonly error_high: number;
  /** Mean. */
  readonly mean: number;
  /** Standard deviation. */
  readonly deviation: number;
}

/**
 * Median, asymmetric errors, mean and deviation of weighted draws.
 *
 * @param values N draws.
 * @param weights N weights, not negative.
 * @returns The summary.
 */
export function summarise(values: Float64Array, weights: Float64Array): DrawSummary {
  let total = 0, mean = 0;
  values.forEach((v, k) => {
    total += weights[k]!;
    mean += weights[k]! * v;
  });
  mean /= total;
  let square = 0;
  values.forEach((v, k) => square += weights[k]! * (v - mean) ** 2);
  const at = quantiles(values, weights, total);
  const median = at(0.5);
  return {
    median,
    error_low: median - at(0.158655),
    error_high: at(0.841345) - median,
    mean,
    deviation: Math.sqrt(square / total),
  };
}

/** Quantiles: the first value at which the summed weight reaches a share of the total. */
function quantiles(values: Float64Array, weights: Float64Array, total: number) {
  if (weights.every((w) => w === weights[0])) {
    // Sorting bare numbers is many times as fast.
    const sorted = values.slice().sort();
    return (p: number) => sorted[Math.min(sorted.length - 1, Math.ceil(p * sorted.length) - 1)]!;
  }
  const order = Uint32Array.from(values.keys()).sort((a, b) => values[a]! - values[b]!);
  return (p: number) => {
    let sum = 0;
    for (const k of order) {
      sum += weights[k]!;
      if (sum >= p * total) return values[k]!;
    }
    return values[order.at(-1)!]!;
  };
}
