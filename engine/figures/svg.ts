import { Buffer } from "node:buffer";
import { resampleCells } from "./cells.ts";
import type { ImageItem, Item, Picture } from "./display_list.ts";
import type { FaceName } from "./font_names.ts";
import { fontRules } from "./font_rules.ts";
import { facePieces, fontFace } from "./fonts.ts";
import type { Metadata } from "./marks.ts";
import { pngOfLines } from "./png_file.ts";
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
  /** True to bring along the letters that are used, as web fonts. @default {true} */
  readonly embed_fonts?: boolean;
}

/**
 * Draws a picture as SVG: text stays text, and its letters come along for viewers without the font.
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
  const { rasterise = repeatCells, embed_fonts = true, ...rest } = options;
  const style = embed_fonts ? { style: fontRules(usedCharacters(picture.items)) } : {};
  const image_url = (image: ImageItem) => url(rasterise(image));
  return drawSvg(picture, { ...fontTools, ...rest, ...style, image_url });
}

/**
 * Characters of all text, by the face that writes them.
 *
 * @param items The items of a picture.
 * @returns For each face its characters, each once and in order; empty for a face that is not used.
 *
 * @example
 * ```ts
 * import { plainRuns, usedCharacters } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const text = { kind: "text", x: 0, y: 9, size_pt: 8, runs: plainRuns("abba") } as const;
 * assertEquals(usedCharacters([text]), { regular: "ab", italic: "", fallback: "" });
 * ```
 */
export function usedCharacters(items: readonly Item[]): Record<FaceName, string> {
  const used: Record<FaceName, Set<string>> = {
    regular: new Set(),
    italic: new Set(),
    fallback: new Set(),
  };
  const look = (item: Item): void => {
    if (item.kind === "group") item.items.forEach(look);
    if (item.kind !== "text") return;
    for (const { text, face } of item.runs.flatMap(facePieces)) {
      for (const character of text) used[face].add(character);
    }
  };
  items.forEach(look);
  const sorted = (set: Set<string>) => [...set].sort().join("");
  return {
    regular: sorted(used.regular),
    italic: sorted(used.italic),
    fallback: sorted(used.fallback),
  };
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
  return pngOfLines(resampleCells(image, size));
}
