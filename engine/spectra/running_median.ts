/** Options of {@linkcode runningMedian}. */
export interface RunningMedianOptions {
  /** Samples taken on either side. */
  readonly half: number;
  /**
   * Whether a sample counts in its own median.
   * @default true
   */
  readonly own?: boolean;
}

// Place of the first entry not below a value in the sorted beginning of a window.
function placeIn(window: Float64Array, length: number, value: number): number {
  let [low, high] = [0, length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (window[middle]! < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * Median of the usable samples near each sample. The window is kept sorted while it moves, so the
 * cost grows with its width only by the moving of memory.
 *
 * @param values The samples.
 * @param usable Samples count where this is finite; may be the values themselves.
 * @param options Width of the window.
 * @returns One median a sample; NaN where fewer than three count.
 *
 * @example
 * ```ts
 * import { runningMedian } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const values = Float64Array.of(1, 9, 2, 3, NaN);
 * assertEquals(runningMedian(values, values, { half: 2 }), Float64Array.of(2, 2.5, 2.5, 3, NaN));
 * ```
 */
export function runningMedian(
  values: Float64Array,
  usable: Float64Array,
  options: RunningMedianOptions,
): Float64Array {
  const { half, own = true } = options;
  const count = values.length;
  const window = new Float64Array(2 * half + 2);
  let length = 0;
  const add = (i: number) => {
    if (i < 0 || i >= count || !Number.isFinite(usable[i]!)) return;
    const at = placeIn(window, length, values[i]!);
    window.copyWithin(at + 1, at, length);
    window[at] = values[i]!;
    length++;
  };
  const drop = (i: number) => {
    if (i < 0 || i >= count || !Number.isFinite(usable[i]!)) return;
    const at = placeIn(window, length, values[i]!);
    window.copyWithin(at, at + 1, length);
    length--;
  };
  for (let i = 0; i < half; i++) add(i);
  const out = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    add(i + half);
    drop(i - half - 1);
    if (!own) drop(i);
    out[i] = length < 3 ? NaN : 0.5 * (window[(length - 1) >> 1]! + window[length >> 1]!);
    if (!own) add(i);
  }
  return out;
}
