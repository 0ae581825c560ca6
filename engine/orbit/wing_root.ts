import type { DoubleGaussianOptions, DoubleGaussianVelocity } from "./double_gaussian.ts";
import type { WingScan } from "./wing_scan.ts";

/** Roots of red minus blue flux within a range. */
function rootsOf(
  scan: WingScan,
  a: number,
  range: readonly [number, number],
  step: number,
): number[] {
  const [low, high] = range;
  const difference = (v: number) => scan.quick(v + a) - scan.quick(v - a);
  const roots: number[] = [];
  const steps = Math.max(1, Math.ceil((high - low) / step));
  let before = difference(low);
  for (let k = 1; k <= steps; k++) {
    const v = low + (high - low) * k / steps;
    const here = difference(v);
    if (before * here < 0 || here === 0) {
      // Secant on the interpolation, then Newton's steps on the exact sums.
      const width = (high - low) / steps;
      let root = v - width * here / (here - before);
      for (let round = 0; round < 4; round++) {
        const [red, red_slope] = scan.smooth(root + a);
        const [blue, blue_slope] = scan.smooth(root - a);
        const move = (red - blue) / (red_slope - blue_slope);
        if (!(Math.abs(move) <= width)) break;
        root -= move;
        if (Math.abs(move) < 1e-9) break;
      }
      roots.push(root);
    }
    before = here;
  }
  return roots;
}

/** The velocity on a prepared profile, and what its error is made of. */
export function measureWings(
  scan: WingScan,
  options: DoubleGaussianOptions,
): DoubleGaussianVelocity {
  const { half_separation_kms: a, sigma_kms } = options;
  const { near_kms = scan.mean_kms, search_kms = a } = options;
  const edge = a + 3 * sigma_kms;
  const low = Math.max(near_kms - search_kms, scan.range_kms[0] + edge);
  const high = Math.min(near_kms + search_kms, scan.range_kms[1] - edge);
  const none = { velocity_kms: NaN, error_kms: Infinity, roots_kms: [], slope: NaN };
  if (!(high > low)) return none;
  const roots_kms = rootsOf(scan, a, [low, high], sigma_kms / 4);
  if (roots_kms.length === 0) return none;
  const velocity_kms = roots_kms.reduce((best, root) =>
    Math.abs(root - near_kms) < Math.abs(best - near_kms) ? root : best
  );
  const slope = scan.smooth(velocity_kms + a)[1] - scan.smooth(velocity_kms - a)[1];
  const window = 2.5 * sigma_kms;
  if (!scan.covers(velocity_kms + a, window) || !scan.covers(velocity_kms - a, window)) {
    return { ...none, roots_kms };
  }
  const kernel = new Float64Array(scan.variance.length);
  scan.addKernel(velocity_kms + a, 1, kernel);
  scan.addKernel(velocity_kms - a, -1, kernel);
  const variance = kernel.reduce((sum, k, n) => sum + k * k * scan.variance[n]!, 0);
  return { velocity_kms, error_kms: Math.sqrt(variance) / Math.abs(slope), roots_kms, slope };
}
