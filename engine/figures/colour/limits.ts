/**
 * Limits of a colour scale that one odd pixel cannot set: quantiles of the values, drawn out to
 * round numbers.
 *
 * @param values The values; those not finite are left out.
 * @param options Which quantiles.
 * @returns Lower and upper limit, the upper one always greater.
 *
 * @example
 * ```ts
 * import { robustLimits } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const values = Array.from({ length: 1001 }, (_, i) => i / 1000);
 * values[3] = 1e6; // a cosmic ray
 * assertEquals(robustLimits(values), [0, 1]);
 * ```
 */
export function robustLimits(
  values: ArrayLike<number>,
  options: LimitOptions = {},
): [low: number, high: number] {
  const { part = 0.997, symmetric = false } = options;
  const finite = new Float64Array(values.length);
  let count = 0;
  for (let i = 0; i < values.length; i++) {
    if (Number.isFinite(values[i])) finite[count++] = values[i]!;
  }
  const sorted = finite.subarray(0, count).sort();
  if (sorted.length === 0) return symmetric ? [-1, 1] : [0, 1];
  const at = (p: number) => sorted[Math.round(p * (sorted.length - 1))]!;
  let low = at(1 - part);
  let high = at(part);
  if (symmetric) {
    high = Math.max(Math.abs(low), Math.abs(high));
    low = -high;
  }
  if (!(high > low)) {
    const margin = Math.abs(high) || 1;
    return symmetric ? [-margin, margin] : [low, low + margin];
  }
  const step = roundStep((high - low) / 20);
  return [tidy(Math.floor(low / step + 1e-9) * step), tidy(Math.ceil(high / step - 1e-9) * step)];
}

/** Choices in finding limits. */
export interface LimitOptions {
  /** Part of the values that the upper limit must reach. @default {0.997} */
  readonly part?: number;
  /** True to put zero in the middle. @default {false} */
  readonly symmetric?: boolean;
}

/** The largest of 1, 2, 5 × 10ⁿ that does not exceed `size`. */
function roundStep(size: number): number {
  const power = 10 ** Math.floor(Math.log10(size));
  const lead = size / power;
  return power * (lead >= 5 ? 5 : lead >= 2 ? 2 : 1);
}

function tidy(value: number): number {
  return Number(value.toPrecision(12));
}
