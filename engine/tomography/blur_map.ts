import { type MapShape, mapStep } from "./map_shape.ts";
import { vectorMachine } from "./vector_machine.ts";

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
  return mapBlur(options)(values);
}

/**
 * Prepares {@linkcode blurMap} for maps of one shape.
 *
 * @param options Map's shape and the Gaussian's full width at half maximum, km/s.
 * @returns A function from values to new, blurred values.
 *
 * @example
 * ```ts
 * import { mapBlur } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const blur = mapBlur({ pixels: 3, half_width_kms: 10, fwhm_kms: 0 });
 * assertEquals(blur(new Float64Array(9).fill(2)), new Float64Array(9).fill(2));
 * ```
 */
export function mapBlur(
  options: MapShape & {
    readonly fwhm_kms: number;
    /** Whether to do the arithmetic in TypeScript always: the same bits. @default {false} */
    readonly plain?: boolean;
  },
): (values: Float64Array) => Float64Array {
  const { pixels, fwhm_kms, plain = false } = options;
  const sigma = fwhm_kms / Math.sqrt(8 * Math.LN2) / mapStep(options);
  if (!(sigma > 0)) return (values) => values.slice();
  const reach = Math.min(pixels - 1, Math.ceil(5 * sigma));
  const weights = Float64Array.from(
    { length: reach + 1 },
    (_, j) => Math.exp(-0.5 * (j / sigma) ** 2),
  );
  const total = 2 * weights.reduce((a, b) => a + b) - weights[0]!;
  const machine = vectorMachine(8 * (2 * pixels * pixels + reach + 16), { plain });
  const kernel = machine.vector(reach + 1);
  kernel.set(weights.map((w) => w / total));
  const before = machine.vector(pixels * pixels), after = machine.vector(pixels * pixels);
  return (values) => {
    before.set(values);
    machine.blur({ values: before, out: after, kernel, columns: pixels });
    transpose(after, before, pixels);
    machine.blur({ values: before, out: after, kernel, columns: pixels });
    transpose(after, before, pixels);
    return before.slice();
  };
}

const BLOCK = 16;

function transpose(from: Float64Array, into: Float64Array, n: number): void {
  for (let r0 = 0; r0 < n; r0 += BLOCK) {
    const r1 = Math.min(n, r0 + BLOCK);
    for (let c = 0; c < n; c++) {
      for (let r = r0; r < r1; r++) into[c * n + r] = from[r * n + c]!;
    }
  }
}
