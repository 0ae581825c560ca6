import type { Box, ImageItem } from "../display_list.ts";
import { COLOUR_COUNT, type ColourMapName, colourTable } from "./colour_map.ts";
import { stretchBy, type StretchOptions } from "./stretch.ts";

/** How values become colours. */
export interface ColourScale extends StretchOptions {
  /** The colour map. @default {"ink"} */
  readonly map?: ColourMapName;
}

/** A table of values to be painted. */
export interface Grid {
  /** Number of rows, R. */
  readonly rows: number;
  /** Number of columns, C. */
  readonly columns: number;
  /** R × C values, row-major, stride C; NaN where there is none. Row 0 is the lowest on the page. */
  readonly values: ArrayLike<number>;
}

/**
 * Paints a grid: row 0 at the bottom, column 0 at the left, cells without a value left blank.
 *
 * @param grid The values.
 * @param options Where it goes on the page, and the colours.
 * @returns The image.
 *
 * @example A 2 × 2 grid: the highest value is in row 1, so at the top
 * ```ts
 * import { paintGrid } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const grid = { rows: 2, columns: 2, values: [0, 0, 1, 0] };
 * const box = { x: 0, y: 0, width: 10, height: 10 };
 * const image = paintGrid(grid, { box, scale: { limits: [0, 1] } });
 * assert(image.rgb[0]! < 60); // dark: top left
 * assert(image.rgb[6]! > 240); // light: bottom left
 * ```
 */
export function paintGrid(grid: Grid, options: PaintOptions): ImageItem {
  const { rows, columns, values } = grid;
  const { box, scale } = options;
  const table = colourTable(scale.map ?? "ink");
  const placeOf = stretchBy(scale);
  const rgb = new Uint8Array(rows * columns * 3);
  for (let row = 0; row < rows; row++) {
    let out = (rows - 1 - row) * columns * 3;
    for (let column = 0; column < columns; column++, out += 3) {
      const place = placeOf(values[row * columns + column]!);
      // A cell without a value is bare paper.
      const blank = Number.isNaN(place);
      const from = blank ? 0 : 3 * Math.round(Math.min(1, Math.max(0, place)) * (COLOUR_COUNT - 1));
      for (let k = 0; k < 3; k++) rgb[out + k] = blank ? 255 : table[from + k]!;
    }
  }
  return { kind: "image", ...box, columns, rows, rgb };
}

/** Where a grid goes and how it is coloured. */
export interface PaintOptions {
  /** Place on the page, pt. */
  readonly box: Box;
  /** Values to colours. */
  readonly scale: ColourScale;
}
