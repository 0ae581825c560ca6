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
  /** Colours of maps and trails. */
  readonly colour_map?: string;
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
  /** Resolution of PNG files, dots per inch. */
  readonly png_dpi?: number;
}

/** A row of panels. */
export interface PlateRowSettings {
  /** Names of the panels from left to right. */
  readonly panels: readonly string[];
  /** Height of their frames, mm. */
  readonly height_mm?: number;
  /** Name of the line shown; the first one when absent. */
  readonly line?: string;
}

const row = z.strictObject({
  panels: z.array(text).min(1),
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
  colour_map: text.optional(),
  stretch: z.enum(["linear", "square-root", "asinh"]).optional(),
  map_limits: range.optional(),
  trail_limits: range.optional(),
  residual_limit_sigma: positive.optional(),
  shape: z.enum(["round", "square"]).optional(),
  share: z.array(z.enum(["map", "trail"])).default([]),
  png_dpi: nonNegative.gte(50).lte(1200).optional(),
});
