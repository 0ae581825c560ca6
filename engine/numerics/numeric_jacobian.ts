import type { Bounds } from "./bounds.ts";

/** What {@linkcode numericJacobian} needs besides the function and the point. */
export interface DifferenceOptions {
  /** N residuals at the point. */
  readonly residuals: Float64Array;
  /** Size below which a parameter counts as small, one each. */
  readonly typical: Float64Array;
  /** Bounds that no evaluation may cross. */
  readonly bounds: Bounds;
  /** Two-sided differences: twice the evaluations, some 1e-11 instead of 1e-8 in relative error. */
  readonly central: boolean;
}

/**
 * Jacobian by differences, N × K row-major. A parameter that its bounds hold fixed has a column of
 * zeros.
 */
export function numericJacobian(
  f: (parameters: Float64Array) => Float64Array,
  at: Float64Array,
  { residuals, typical, bounds, central }: DifferenceOptions,
): Float64Array {
  const n = residuals.length;
  const k = at.length;
  const jacobian = new Float64Array(n * k);
  const fraction = central ? Math.cbrt(Number.EPSILON) : Math.sqrt(Number.EPSILON);
  for (let j = 0; j < k; j++) {
    const low = bounds.lower[j]!;
    const high = bounds.upper[j]!;
    if (low === high) continue;
    const x = at[j]!;
    const step = Math.min(fraction * Math.max(Math.abs(x), typical[j]!), (high - low) / 4);
    const up = x + step <= high ? x + step : x;
    const down = (central || up === x) && x - step >= low ? x - step : x;
    const shifted = (value: number) => f(at.map((kept, i) => i === j ? value : kept));
    const above = up === x ? residuals : shifted(up);
    const below = down === x ? residuals : shifted(down);
    const width = up - down;
    for (let i = 0; i < n; i++) jacobian[i * k + j] = (above[i]! - below[i]!) / width;
  }
  return jacobian;
}
