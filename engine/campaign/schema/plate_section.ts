import { z } from "zod";
import { nonNegative, positive, range, text } from "./common.ts";

/** `[plate]`: the figure. Names of panels and colour maps are checked where they are drawn. */
export interface PlateSettings {
  /** Formats to write. */
  readonly formats: readonly ("svg" | "png" | "pdf")[];
  /** Width of the figure: a journal's column, or mm. */
  readonly width: "one-column" | "two-column" | number;
  /** Title above the figure, in place of the target's. */
  readonly title?: string;
  /** Rows of panels from the top down; one standard plate a line when absent. */
  readonly rows?: readonly PlateRowSettings[];
  /** Whether the rows are repeated for every line. */
  readonly each_line: boolean;
  /** Whether panels are lettered (a), (b), … */
  readonly letters: boolean;
  /** How many times as large letters and lines are within the same width: for slides. */
  readonly enlarge?: number;
  /** Colours of maps and trails. */
  readonly colour_map?: string;
  /** Colours of signed panels: residual, asymmetric part, significance. */
  readonly signed_colour_map?: string;
  /** Stretch of maps and trails. */
  readonly stretch?: "linear" | "square-root" | "asinh";
  /** Limits of maps. */
  readonly map_limits?: readonly [number, number];
  /** Limits of trail and model. */
  readonly trail_limits?: readonly [number, number];
  /** Limit of the residual on either side, σ. */
  readonly residual_limit_sigma?: number;
  /** Shape of the maps' windows. */
  readonly shape?: "round" | "square";
  /** Scales that all lines have in common. */
  readonly share: readonly ("map" | "trail")[];
  /** Levels of contours on the map, as parts of its peak. */
  readonly contours: readonly number[];
  /** Radii of rims of the disc that are drawn on the map as circles of Keplerian speed, a. */
  readonly rims_over_a: readonly number[];
  /** Inversions that the page offers beside that of `[map]` and back-projection. */
  readonly page_methods: readonly ("entropy" | "total-variation")[];
  /** Resolution of PNG files, dots per inch. */
  readonly png_dpi?: number;
}

/** A row of panels. */
export interface PlateRowSettings {
  /** The panels from left to right: names, or tables. */
  readonly panels: readonly (string | PlatePanelSettings)[];
  /** Height of their frames, mm. */
  readonly height_mm?: number;
  /** Name of the line shown; the first one when absent. */
  readonly line?: string;
}

/** A panel of a row. */
export interface PlatePanelSettings {
  /** What is drawn. */
  readonly panel: string;
  /** Name of the line shown; the row's when absent. */
  readonly line?: string;
  /** Name above the panel in place of the usual one. */
  readonly name?: string;
}

const panel = z.union([
  text,
  z.strictObject({ panel: text, line: text.optional(), name: text.optional() }),
], { error: "must be a panel's name, or a table with panel, line, name" });

const row = z.strictObject({
  panels: z.array(panel).min(1),
  height_mm: positive.optional(),
  line: text.optional(),
});

/** Schema of PlateSettings. */
export const plateSection: z.ZodType<PlateSettings> = z.strictObject({
  formats: z.array(z.enum(["svg", "png", "pdf"])).min(1).default(["pdf", "png", "svg"]),
  width: z.union([z.enum(["one-column", "two-column"]), z.number().gte(40).lte(1200)], {
    error: 'must be "one-column", "two-column" or 40 to 1200 mm',
  }).default("two-column"),
  title: text.optional(),
  rows: z.array(row).min(1).optional(),
  each_line: z.boolean().default(false),
  letters: z.boolean().default(false),
  enlarge: z.number().gte(0.5).lte(10).optional(),
  colour_map: text.optional(),
  signed_colour_map: text.optional(),
  stretch: z.enum(["linear", "square-root", "asinh"]).optional(),
  map_limits: range.optional(),
  trail_limits: range.optional(),
  residual_limit_sigma: positive.optional(),
  shape: z.enum(["round", "square"]).optional(),
  share: z.array(z.enum(["map", "trail"])).default([]),
  contours: z.array(positive.lt(1)).default([]),
  rims_over_a: z.array(positive.lte(1)).default([]),
  page_methods: z.array(z.enum(["entropy", "total-variation"])).default([]),
  png_dpi: nonNegative.gte(50).lte(1200).optional(),
});
