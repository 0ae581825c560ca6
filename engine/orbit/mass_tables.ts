import { eclipseWidth, inclinationFromEclipse, lobeRadius } from "../binary/mod.ts";
import type { MeasuredValue } from "./mass_input.ts";
import { rotationRatio } from "./rotation_ratio.ts";

/** A slow function of ln q through a table: linear in the logarithms. */
export function tabulated(f: (q: number) => number, low: number, high: number, nodes: number) {
  const from = Math.log(low), step = (Math.log(high) - from) / (nodes - 1);
  const values = Array.from({ length: nodes }, (_, k) => Math.log(f(Math.exp(from + k * step))));
  return {
    value(q: number): number {
      const place = Math.min(nodes - 1.000001, Math.max(0, (Math.log(q) - from) / step));
      const k = Math.floor(place);
      return Math.exp(values[k]! + (place - k) * (values[k + 1]! - values[k]!));
    },
    /** The q at which a rising function has a value; NaN outside. */
    inverse(value: number): number {
      const wanted = Math.log(value);
      if (!(wanted >= values[0]! && wanted <= values[nodes - 1]!)) return NaN;
      let k = 0;
      while (k < nodes - 2 && values[k + 1]! < wanted) k++;
      return Math.exp(from + step * (k + (wanted - values[k]!) / (values[k + 1]! - values[k]!)));
    },
  };
}

// Each takes longer than all draws: made when it is first asked for, and once.
let lobes: ReturnType<typeof tabulated> | undefined;
let rotations: ReturnType<typeof tabulated> | undefined;

/** Volume radius of the donor's lobe over the separation, by mass ratio. */
export function lobeTable(): ReturnType<typeof tabulated> {
  return lobes ??= tabulated((q) => lobeRadius(q), 0.005, 10, 31);
}

/** v sin i over K2 of a donor that fills its lobe, by mass ratio. */
export function rotationTable(): ReturnType<typeof tabulated> {
  return rotations ??= tabulated((q) => rotationRatio(q), 0.005, 10, 41);
}

/** Inclination for an eclipse width, by a table about the likely values. */
export function eclipseTable(qs: readonly [number, number], width: MeasuredValue) {
  const rows = 9, columns = 9;
  const [low, high] = [
    Math.max(1e-4, width.value - 4 * width.error),
    width.value + 4 * width.error,
  ];
  const q_of = (r: number) => qs[0] * (qs[1] / qs[0]) ** (r / (rows - 1));
  const w_of = (c: number) => low + (high - low) * c / (columns - 1);
  const table = Array.from({ length: rows }, (_, r) => {
    const widest = eclipseWidth(q_of(r), 90);
    return Array.from(
      { length: columns },
      (_, c) => w_of(c) <= widest ? inclinationFromEclipse(q_of(r), w_of(c)) : NaN,
    );
  });
  return (q: number, w: number): number => {
    const r = Math.log(q / qs[0]) / Math.log(qs[1] / qs[0]) * (rows - 1);
    const c = high > low ? (w - low) / (high - low) * (columns - 1) : 0;
    if (!(r >= 0 && r <= rows - 1 && c >= 0 && c <= columns - 1)) return NaN;
    const i = Math.min(rows - 2, Math.floor(r)), j = Math.min(columns - 2, Math.floor(c));
    const s = r - i, t = c - j;
    const upper = (1 - t) * table[i]![j]! + t * table[i]![j + 1]!;
    const lower = (1 - t) * table[i + 1]![j]! + t * table[i + 1]![j + 1]!;
    return (1 - s) * upper + s * lower;
  };
}
