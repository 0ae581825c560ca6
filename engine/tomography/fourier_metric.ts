import FFT from "fft.js";
import { nextPowerOfTwo } from "../numerics/mod.ts";

/** Pixels of zeros beside the map, so that its edges do not meet. */
const MARGIN = 8;

/** Solves M x = b for an operator M that multiplies each frequency of a padded map by a number. */
export interface FourierMetric {
  /** Side of the padded square. */
  readonly size: number;
  /** Divides each frequency by `symbol`, size² values in the order of frequencies, row-major. */
  readonly solve: (values: Float64Array, symbol: Float64Array) => Float64Array;
}

/**
 * Prepares solving with operators that are diagonal in frequency on square maps.
 *
 * @param pixels Pixels along a side.
 * @returns The solver; it keeps scratch arrays.
 *
 * @example
 * ```ts
 * import { fourierMetric } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const metric = fourierMetric(5);
 * const halved = metric.solve(new Float64Array(25).fill(3), new Float64Array(metric.size ** 2).fill(2));
 * assertAlmostEquals(halved[7] ?? NaN, 1.5, 1e-12);
 * ```
 */
export function fourierMetric(pixels: number): FourierMetric {
  const size = nextPowerOfTwo(pixels + MARGIN);
  const fft = new FFT(size);
  const rows = new Float64Array(2 * size * size);
  const line = new Float64Array(2 * size), turned = new Float64Array(2 * size);
  return {
    size,
    solve(values, symbol) {
      // Two rows of real values share one complex transform; their spectra are told apart by symmetry.
      rows.fill(0);
      for (let r = 0; r < pixels; r += 2) {
        line.fill(0);
        for (let c = 0; c < pixels; c++) {
          line[2 * c] = values[r * pixels + c]!;
          if (r + 1 < pixels) line[2 * c + 1] = values[(r + 1) * pixels + c]!;
        }
        fft.transform(turned, line);
        rows.set(turned, r * size);
      }
      // Row pair r (in the first half of the array) holds a + ib: columns are transformed for both at
      // once by transforming the complex rows as they are, since the symbol is even in each frequency.
      const pairs = Math.ceil(pixels / 2);
      const even = new Float64Array(2 * size), odd = new Float64Array(2 * size);
      for (let c = 0; c <= size / 2; c++) {
        const mirror = (size - c) % size;
        even.fill(0);
        odd.fill(0);
        for (let p = 0; p < pairs; p++) {
          const at = 2 * p * size;
          const xr = rows[at + 2 * c]!, xi = rows[at + 2 * c + 1]!;
          const yr = rows[at + 2 * mirror]!, yi = rows[at + 2 * mirror + 1]!;
          even[4 * p] = 0.5 * (xr + yr);
          even[4 * p + 1] = 0.5 * (xi - yi);
          even[4 * p + 2] = 0.5 * (xi + yi);
          even[4 * p + 3] = 0.5 * (yr - xr);
        }
        fft.transform(odd, even);
        for (let r = 0; r < size; r++) {
          const s = symbol[r * size + c]!;
          odd[2 * r] = odd[2 * r]! / s;
          odd[2 * r + 1] = odd[2 * r + 1]! / s;
        }
        fft.inverseTransform(even, odd);
        for (let p = 0; p < pairs; p++) {
          const at = 2 * p * size;
          const ar = even[4 * p]!, ai = even[4 * p + 1]!;
          const br = even[4 * p + 2]!, bi = even[4 * p + 3]!;
          rows[at + 2 * c] = ar - bi;
          rows[at + 2 * c + 1] = ai + br;
          if (mirror !== c) {
            rows[at + 2 * mirror] = ar + bi;
            rows[at + 2 * mirror + 1] = br - ai;
          }
        }
      }
      const out = new Float64Array(pixels * pixels);
      for (let r = 0; r < pixels; r += 2) {
        fft.inverseTransform(turned, rows.subarray(r * size, (r + 2) * size));
        for (let c = 0; c < pixels; c++) {
          out[r * pixels + c] = turned[2 * c]!;
          if (r + 1 < pixels) out[(r + 1) * pixels + c] = turned[2 * c + 1]!;
        }
      }
      return out;
    },
  };
}
