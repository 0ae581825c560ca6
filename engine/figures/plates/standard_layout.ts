import { type Box, POINTS_PER_MM } from "../display_list.ts";

/** Where the parts of a standard plate stand, pt. */
export interface StandardLayout {
  /** Width of the plate. */
  readonly width: number;
  /** Height of the plate. */
  readonly height: number;
  /** The map with its ring. */
  readonly map: Box;
  /** Colour bar of the map. */
  readonly map_bar: Box;
  /** Observed, re-projected and residual trail. */
  readonly trails: readonly [observed: Box, projected: Box, residual: Box];
  /** Colour bar of both trails. */
  readonly trail_bar: Box;
  /** Colour bar of the residual. */
  readonly residual_bar: Box;
}

const LEFT = 36; // values and label of a vertical axis
const BELOW = 27; // values and label of a horizontal axis
const ABOVE = 30; // panel names and colour bars
const BAR = 4;
const GAP = 9;

/**
 * Lays out a standard plate: map and trails side by side in two columns, one above the other in one.
 *
 * @param width One column (84 mm) or two (174 mm).
 * @returns Boxes of all its parts.
 *
 * @example
 * ```ts
 * import { standardLayout } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(standardLayout("one-column").width, 84 / 25.4 * 72, 1e-9);
 * ```
 */
export function standardLayout(width: "one-column" | "two-column"): StandardLayout {
  const page = (width === "one-column" ? 84 : 174) * POINTS_PER_MM;
  const side = 84 * POINTS_PER_MM - LEFT - 3;
  const map = { x: LEFT, y: ABOVE, width: side, height: side };
  const beside = width === "two-column";
  const first = beside ? LEFT + side + GAP + LEFT : LEFT;
  const top = beside ? ABOVE : ABOVE + side + BELOW + GAP + ABOVE;
  const tall = beside ? side : 150;
  const wide = (page - first - 3 - 2 * GAP) / 3;
  const trail = (i: number): Box => ({
    x: first + i * (wide + GAP),
    y: top,
    width: wide,
    height: tall,
  });
  const bar = (x: number, y: number, length: number): Box => ({
    x,
    y: y - 8,
    width: length,
    height: BAR,
  });
  return {
    width: page,
    height: top + tall + BELOW,
    map,
    map_bar: bar(map.x, map.y, side),
    trails: [trail(0), trail(1), trail(2)],
    trail_bar: bar(first, top, 2 * wide + GAP),
    residual_bar: bar(trail(2).x, top, wide),
  };
}
