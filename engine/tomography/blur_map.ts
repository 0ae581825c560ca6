import { type MapShape, mapStep } from "./map_shape.ts";

/**
 * Smooths map pixels by a round Gaussian. Beyond the border the map counts as zero, so the sum is
 * kept except for what leaves through the border. The blur is its own transpose.
 *
 * @param values Pixels² values.
 * @param options Map's shape and the Gaussian's full width at half maximum, km/s; 0 changes nothing.
 * @returns New values.
 *
 * @example
 * ```ts
 * import { blurMap } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const point = new Float64Array(81);
 * point[40] = 1;
 * const blurred = blurMap(point, { pixels: 9, half_width_kms: 40, fwhm_kms: 15 });
 * assertAlmostEquals(blurred.reduce((a, b) => a + b), 1, 1e-6);
 * ```
 */
export function blurMap(
  values: Float64Array,
  options: MapShape & { readonly fwhm_kms: number },
): Float64Array {
  const { pixels, fwhm_kms } = options;
  const sigma = fwhm_kms / Math.sqrt(8 * Math.LN2) / mapStep(options);
  if (!(sigma > 0)) return values.slice();
  const reach = Math.min(pixels - 1, Math.ceil(5 * sigma));
  const kernel = Float64Array.from(
    { length: reach + 1 },
    (_, j) => Math.exp(-0.5 * (j / sigma) ** 2),
  );
  const total = 2 * kernel.reduce((a, b) => a + b) - kernel[0]!;
  for (let j = 0; j <= reach; j++) kernel[j] = kernel[j]! / total;
  const half = blurRows(values, pixels, kernel);
  return blurRows(half, pixels, kernel);
}

/** Blurs along rows and transposes: twice, it blurs along both axes. */
function blurRows(values: Float64Array, pixels: number, kernel: Float64Array): Float64Array {
  const out = new Float64Array(values.length);
  const reach = kernel.length - 1;
  const padded = new Float64Array(pixels + 2 * reach);
  for (let row = 0; row < pixels; row++) {
    padded.set(values.subarray(row * pixels, (row + 1) * pixels), reach);
    for (let c = 0; c < pixels; c++) {
      let sum = kernel[0]! * padded[c + reach]!;
      for (let j = 1; j <= reach; j++) {
        sum += kernel[j]! * (padded[c + reach - j]! + padded[c + reach + j]!);
      }
      out[c * pixels + row] = sum;
    }
  }
  return out;
}
