/** How values between the limits are spread over the colours. */
export const stretchNames = ["linear", "square-root", "asinh"] as const;

/** Name of a stretch. */
export type StretchName = typeof stretchNames[number];

// The asinh stretch turns from linear to logarithmic at a tenth of the range.
const SOFTENING = 10;

/**
 * Place of a value on the colour map. The square root and the asinh are odd about zero, so signed
 * values keep their signs apart.
 *
 * @param value The value.
 * @param options Limits and stretch.
 * @returns 0 at the lower limit, 1 at the upper; not clipped. NaN stays NaN.
 *
 * @example
 * ```ts
 * import { stretched } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(stretched(5, { limits: [0, 10] }), 0.5);
 * assertEquals(stretched(2.5, { limits: [0, 10], stretch: "square-root" }), 0.5);
 * ```
 */
export function stretched(value: number, options: StretchOptions): number {
  return stretchBy(options)(value);
}

/**
 * {@linkcode stretched} for many values of one scale.
 *
 * @param options Limits and stretch.
 * @returns The place of a value.
 *
 * @example
 * ```ts
 * import { stretchBy } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const place = stretchBy({ limits: [-1, 1] });
 * assertEquals([-1, 0, 1].map(place), [0, 0.5, 1]);
 * ```
 */
export function stretchBy(options: StretchOptions): (value: number) => number {
  const { limits: [low, high], stretch = "linear" } = options;
  const unit = Math.max(Math.abs(low), Math.abs(high)) || 1;
  const bend = bends[stretch];
  const from = bend(low / unit);
  const length = bend(high / unit) - from;
  return (value) => (bend(value / unit) - from) / length;
}

/** Limits and stretch of a colour scale. */
export interface StretchOptions {
  /** Values of the first and the last colour. */
  readonly limits: readonly [low: number, high: number];
  /** How values are spread. @default {"linear"} */
  readonly stretch?: StretchName;
}

const bends: Readonly<Record<StretchName, (part: number) => number>> = {
  linear: (part) => part,
  "square-root": (part) => Math.sign(part) * Math.sqrt(Math.abs(part)),
  asinh: (part) => Math.asinh(SOFTENING * part),
};
