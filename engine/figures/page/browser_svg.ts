/// <reference lib="dom" />
import type { ImageItem, Item, Picture, Run } from "../display_list.ts";
import type { FacePiece } from "../font_names.ts";
import { drawSvg, drawSvgItems, type SvgTools } from "../svg_draw.ts";

const urls = new WeakMap<Uint8Array, string>();

/** Cells as a PNG made by the browser; the same cells are made once. */
function imageUrl(image: ImageItem): string {
  const known = urls.get(image.rgb);
  if (known) return known;
  const canvas = document.createElement("canvas");
  canvas.width = image.columns;
  canvas.height = image.rows;
  const context = canvas.getContext("2d")!;
  const pixels = context.createImageData(image.columns, image.rows);
  for (let i = 0, j = 0; i < image.rgb.length; i += 3, j += 4) {
    pixels.data[j] = image.rgb[i]!;
    pixels.data[j + 1] = image.rgb[i + 1]!;
    pixels.data[j + 2] = image.rgb[i + 2]!;
    pixels.data[j + 3] = 255;
  }
  context.putImageData(pixels, 0, 0);
  const url = canvas.toDataURL("image/png");
  urls.set(image.rgb, url);
  return url;
}

/** A browser finds missing glyphs in the next family by itself, so a run stays whole. */
function wholeRun(run: Run): FacePiece[] {
  return [{ text: run.text, face: run.italic ? "italic" : "regular" }];
}

function tools(id_prefix: string): SvgTools {
  return { image_url: imageUrl, pieces: wholeRun, piece_width: () => 0, id_prefix };
}

/** A picture as SVG markup. */
export function pictureMarkup(picture: Picture, id_prefix: string, style?: string): string {
  return drawSvg(picture, { ...tools(id_prefix), ...(style === undefined ? {} : { style }) });
}

/** Items as SVG markup, to be laid over a picture. */
export function itemsMarkup(items: readonly Item[], id_prefix: string): string {
  return drawSvgItems(items, tools(id_prefix));
}
