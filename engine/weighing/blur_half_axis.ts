/** Variance, in bins, up to which a kernel of three points with just that variance is used. */
const NARROW = 0.5;

/**
 * Blurs a function that is even or odd, given from zero on, with a Gaussian.
 *
 * @param values Values at 0, 1, 2, … bins.
 * @param options Variance of the Gaussian, bins², and whether the function is odd.
 * @returns The blurred function from zero on, longer by the kernel's reach.
 */
export function blurHalfAxis(
  values: Float64Array,
  { variance, odd }: { readonly variance: number; readonly odd: boolean },
): Float64Array {
  const weights = kernel(variance);
  const reach = weights.length - 1;
  const inner = values.length - 1;
  const blurred = new Float64Array(values.length + reach);
  for (let k = -Math.min(inner, reach); k <= inner; k++) {
    const value = k < 0 ? (odd ? -values[-k]! : values[-k]!) : values[k]!;
    if (value === 0) continue;
    for (let j = Math.max(-reach, -k); j <= reach; j++) {
      blurred[k + j]! += value * weights[j < 0 ? -j : j]!;
    }
  }
  if (odd) blurred[0] = 0;
  return blurred;
}

/** By how many bins a blurred function is longer. */
export function blurReach(variance: number): number {
  return variance < NARROW ? 1 : Math.ceil(5.5 * Math.sqrt(variance));
}

/** Weights at distances 0, 1, 2, …. A Gaussian narrower than a bin is not sampled but made of three points. */
function kernel(variance: number): Float64Array {
  if (variance < NARROW) return Float64Array.of(1 - variance, variance / 2);
  const sigma = Math.sqrt(variance);
  const weights = Float64Array.from(
    { length: blurReach(variance) + 1 },
    (_, j) => Math.exp(-0.5 * (j / sigma) ** 2),
  );
  const total = weights.reduce((sum, w, j) => sum + (j === 0 ? w : 2 * w), 0);
  return weights.map((weight) => weight / total);
}

/**
 * The whole axis of a function that is given from zero on: values at −half to half bins.
 */
export function wholeAxis(
  values: Float64Array,
  { odd }: { readonly odd: boolean },
): { readonly half: number; readonly values: Float64Array } {
  const half = values.length - 1;
  const whole = new Float64Array(2 * half + 1);
  for (let k = 0; k <= half; k++) {
    whole[half + k] = values[k]!;
    whole[half - k] = odd ? -values[k]! : values[k]!;
  }
  return { half, values: whole };
}
