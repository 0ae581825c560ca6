/** Paint of a path. Colours are `#rrggbb`; widths are in points. */
export interface Paint {
  /** Fill colour; none when absent. */
  readonly fill?: string;
  /** Opacity of the fill, 0 to 1. @default {1} */
  readonly fill_opacity?: number;
  /** Stroke colour; none when absent. */
  readonly stroke?: string;
  /** Stroke width, pt. @default {0.5} */
  readonly stroke_pt?: number;
  /** Opacity of the stroke, 0 to 1. @default {1} */
  readonly stroke_opacity?: number;
  /** Lengths of dashes and gaps, pt; solid when absent. */
  readonly dash_pt?: readonly number[];
  /** Ends of open lines. @default {"butt"} */
  readonly cap?: "butt" | "round";
}

/** A path: lines, curves and areas. */
export interface PathItem extends Paint {
  /** Tells the kind of item. */
  readonly kind: "path";
  /** SVG path data of absolute commands (M, L, C, Q, Z), in points, y downwards. */
  readonly d: string;
}

/** A picture of cells, drawn crisp: every cell one colour. */
export interface ImageItem {
  /** Tells the kind of item. */
  readonly kind: "image";
  /** Left edge, pt. */
  readonly x: number;
  /** Top edge, pt. */
  readonly y: number;
  /** Width on the page, pt. */
  readonly width: number;
  /** Height on the page, pt. */
  readonly height: number;
  /** Cells along a row, C. */
  readonly columns: number;
  /** Rows of cells, R. */
  readonly rows: number;
  /** Colours, R × C × 3 bytes (red, green, blue), row-major, the top row first. */
  readonly rgb: Uint8Array;
}

/** A piece of text in one style. */
export interface Run {
  /** The characters. */
  readonly text: string;
  /** True for italic. @default {false} */
  readonly italic?: boolean;
  /** Raised (superscript) or lowered (subscript) and smaller. */
  readonly script?: "super" | "sub";
}

/** A line of text made of runs. */
export interface TextItem {
  /** Tells the kind of item. */
  readonly kind: "text";
  /** Anchor, pt. */
  readonly x: number;
  /** Baseline at the anchor, pt. */
  readonly y: number;
  /** What is written. */
  readonly runs: readonly Run[];
  /** Size, pt. */
  readonly size_pt: number;
  /** Which part of the text stands at the anchor. @default {"start"} */
  readonly anchor?: "start" | "middle" | "end";
  /** Turn about the anchor, degrees, clockwise on the page. @default {0} */
  readonly rotate_deg?: number;
  /** Colour. @default {"#000000"} */
  readonly fill?: string;
  /** Colour of a thin outline behind the letters, for text over an image; none when absent. */
  readonly halo?: string;
}

/** Items drawn one after another, shifted and, where stated, clipped. */
export interface Group {
  /** Tells the kind of item. */
  readonly kind: "group";
  /** What is in it, the lowest first. */
  readonly items: readonly Item[];
  /** Shift to the right, pt. @default {0} */
  readonly x?: number;
  /** Shift down, pt. @default {0} */
  readonly y?: number;
  /** Path data (after the shift) outside which nothing is drawn. */
  readonly clip?: string;
  /** A name by which tests and the page find the group. */
  readonly name?: string;
}

/** Anything that can be drawn. */
export type Item = PathItem | ImageItem | TextItem | Group;

/**
 * A whole figure as data: what to draw, in points (1/72 inch) from the top left corner. SVG, PNG and
 * PDF are made from this one list.
 */
export interface Picture {
  /** Width, pt. */
  readonly width: number;
  /** Height, pt. */
  readonly height: number;
  /** What is drawn, the lowest first. */
  readonly items: readonly Item[];
  /** Short title, kept in the file's metadata. */
  readonly title: string;
  /** Text for those who cannot see the figure. */
  readonly description: string;
}

/** Points in a millimetre. */
export const POINTS_PER_MM = 72 / 25.4;

/**
 * A number as path data and attributes need it: at most three decimals (0.4 µm on the page), so
 * that the same figure gives the same bytes.
 *
 * @param value A length in points.
 * @returns The shortest text of the rounded number.
 *
 * @example
 * ```ts
 * import { trim } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(trim(1 / 3), "0.333");
 * assertEquals(trim(-0.0001), "0");
 * ```
 */
export function trim(value: number): string {
  const rounded = Math.round(value * 1000) / 1000;
  return String(rounded === 0 ? 0 : rounded);
}

/**
 * Path data of a line through points. A point that is not finite breaks the line.
 *
 * @param points Pairs [x, y], pt.
 * @param closed True to join the last point to the first.
 * @returns SVG path data; empty when there is nothing to draw.
 *
 * @example
 * ```ts
 * import { linePath } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(linePath([[0, 0], [1, 2]]), "M0,0L1,2");
 * assertEquals(linePath([[0, 0], [NaN, 1], [2, 2], [3, 3]]), "M0,0M2,2L3,3");
 * ```
 */
export function linePath(
  points: Iterable<readonly [x: number, y: number]>,
  closed = false,
): string {
  let d = "";
  let pen = "M";
  for (const [x, y] of points) {
    if (!Number.isFinite(x) || !Number.isFinite(y)) {
      pen = "M";
      continue;
    }
    d += `${pen}${trim(x)},${trim(y)}`;
    pen = "L";
  }
  return closed && d !== "" ? `${d}Z` : d;
}

/**
 * Path data of a rectangle.
 *
 * @param box Left and top edge, width and height, pt.
 * @returns SVG path data.
 *
 * @example
 * ```ts
 * import { boxPath } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(boxPath({ x: 1, y: 2, width: 3, height: 4 }), "M1,2L4,2L4,6L1,6Z");
 * ```
 */
export function boxPath(box: Box): string {
  const { x, y, width, height } = box;
  return linePath([[x, y], [x + width, y], [x + width, y + height], [x, y + height]], true);
}

/**
 * Path data of an ellipse, in four Bézier curves (within 0.03 % of the true one).
 *
 * @param centre Its centre [x, y], pt.
 * @param options Radii and turn.
 * @returns SVG path data.
 *
 * @example
 * ```ts
 * import { ellipsePath } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * assert(ellipsePath([5, 5], { rx: 2, ry: 1 }).startsWith("M7,5C"));
 * ```
 */
export function ellipsePath(
  centre: readonly [x: number, y: number],
  options: EllipseOptions,
): string {
  const { rx, ry = rx, rotate_deg = 0 } = options;
  const k = 4 / 3 * (Math.SQRT2 - 1);
  const angle = rotate_deg * Math.PI / 180;
  const cos = Math.cos(angle);
  const sin = Math.sin(angle);
  const at = (u: number, v: number) => {
    const x = centre[0] + rx * u * cos - ry * v * sin;
    const y = centre[1] + rx * u * sin + ry * v * cos;
    return `${trim(x)},${trim(y)}`;
  };
  return `M${at(1, 0)}C${at(1, k)} ${at(k, 1)} ${at(0, 1)}` +
    `C${at(-k, 1)} ${at(-1, k)} ${at(-1, 0)}` +
    `C${at(-1, -k)} ${at(-k, -1)} ${at(0, -1)}` +
    `C${at(k, -1)} ${at(1, -k)} ${at(1, 0)}Z`;
}

/** Radii of an ellipse and its turn. */
export interface EllipseOptions {
  /** First radius, pt. */
  readonly rx: number;
  /** Second radius, pt; the first when absent. */
  readonly ry?: number;
  /** Turn of the first radius from the x axis, degrees, clockwise on the page. @default {0} */
  readonly rotate_deg?: number;
}

/** A rectangle on the page. */
export interface Box {
  /** Left edge, pt. */
  readonly x: number;
  /** Top edge, pt. */
  readonly y: number;
  /** Width, pt. */
  readonly width: number;
  /** Height, pt. */
  readonly height: number;
}
