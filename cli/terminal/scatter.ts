// Dots of one braille character: two columns of four, bit by row and column.
const DOTS = [[0x01, 0x08], [0x02, 0x10], [0x04, 0x20], [0x40, 0x80]] as const;

/** One thing to draw in a {@linkcode scatterLines} picture. */
export interface ScatterLayer {
  /** Points as [x, y]. */
  readonly points: readonly (readonly [number, number])[];
  /** Whether the points are joined. @default {false} */
  readonly joined?: boolean;
  /** One letter drawn at the first point in place of dots. */
  readonly letter?: string;
}

/**
 * A small picture in braille dots, x to the right and y upwards, both on one scale.
 *
 * @param layers What is drawn; later letters cover earlier dots.
 * @param options Its frame.
 * @param options.x Limits of x.
 * @param options.y Limits of y.
 * @param options.width Width in characters.
 * @returns One line of text a row.
 */
export function scatterLines(
  layers: readonly ScatterLayer[],
  options: {
    x: readonly [number, number];
    y: readonly [number, number];
    width: number;
  },
): string[] {
  const { x, y, width } = options;
  const scale = (2 * width - 1) / (x[1] - x[0]);
  const rows = Math.max(1, Math.ceil(((y[1] - y[0]) * scale + 1) / 4));
  const cells = new Uint8Array(rows * width);
  const letters = new Map<number, string>();
  const dot = ([px, py]: readonly [number, number]): readonly [number, number] => [
    Math.round((px - x[0]) * scale),
    Math.round((y[1] - py) * scale),
  ];
  const set = (column: number, row: number) => {
    const at = (row >> 2) * width + (column >> 1);
    if (column < 0 || column >= 2 * width || row < 0 || row >= 4 * rows) return;
    cells[at]! |= DOTS[row & 3]![column & 1]!;
  };
  for (const { points, joined = false, letter } of layers) {
    if (letter !== undefined) {
      const [column, row] = dot(points[0]!);
      letters.set((row >> 2) * width + (column >> 1), letter);
      continue;
    }
    points.forEach((point, i) => {
      const [c1, r1] = dot(point);
      set(c1, r1);
      if (!joined || i === 0) return;
      const [c0, r0] = dot(points[i - 1]!);
      const steps = Math.max(Math.abs(c1 - c0), Math.abs(r1 - r0));
      for (let s = 1; s < steps; s++) {
        set(
          Math.round(c0 + ((c1 - c0) * s) / steps),
          Math.round(r0 + ((r1 - r0) * s) / steps),
        );
      }
    });
  }
  return Array.from(
    { length: rows },
    (_, row) =>
      Array.from({ length: width }, (_, column) =>
        letters.get(row * width + column) ??
          String.fromCharCode(0x2800 + cells[row * width + column]!)).join("").replace(/⠀+$/, ""),
  );
}
