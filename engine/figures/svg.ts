import { Buffer } from "node:buffer";
import { resampleCells } from "./cells.ts";
import type { ImageItem, Picture } from "./display_list.ts";
import { facePieces, fontFace } from "./fonts.ts";
import type { Metadata } from "./marks.ts";
import { pngFile } from "./png_file.ts";
import { drawSvg, type SvgTools } from "./svg_draw.ts";

/** How an SVG is written. */
export interface SvgOptions {
  /** Facts for its metadata. @default {{}} */
  readonly metadata?: Metadata;
  /** Begins every id, so that several figures can stand in one page. @default {"m"} */
  readonly id_prefix?: string;
  /**
   * Makes the pixels of an image, as a PNG file: by default cells are repeated (up to 4 × 4), as some
   * viewers smooth what they should not.
   */
  readonly rasterise?: (image: ImageItem) => Uint8Array;
}

/**
 * Draws a picture as SVG: text stays text, in STIX Two Text where the viewer has it.
 *
 * @param picture The picture.
 * @param options Metadata, ids.
 * @returns The SVG document.
 *
 * @example
 * ```ts
 * import { labelRuns, svgText } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const text = { kind: "text", x: 5, y: 15, size_pt: 8, runs: labelRuns("km s^{−1}") } as const;
 * const svg = svgText({ width: 60, height: 20, items: [text], title: "Unit", description: "A unit" });
 * assert(svg.includes(">−1</tspan>"));
 * ```
 */
export function svgText(picture: Picture, options: SvgOptions = {}): string {
  const { rasterise = repeatCells, ...rest } = options;
  return drawSvg(picture, { ...fontTools, ...rest, image_url: (image) => url(rasterise(image)) });
}

const fontTools: Pick<SvgTools, "pieces" | "piece_width"> = {
  pieces: facePieces,
  piece_width: ({ text, face }) => fontFace(face).metrics.width(text),
};

function url(png: Uint8Array): string {
  return `data:image/png;base64,${Buffer.from(png).toString("base64")}`;
}

function repeatCells(image: ImageItem): Uint8Array {
  const times = Math.max(1, Math.min(4, Math.round(800 / Math.max(image.columns, image.rows))));
  const size = { columns: image.columns * times, rows: image.rows * times };
  return pngFile({ ...size, rgb: resampleCells(image, size) });
}
