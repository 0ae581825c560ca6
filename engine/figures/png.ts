import { type Coverage, paintCells, resampleCells } from "./cells.ts";
import type { Item, Picture } from "./display_list.ts";
import { type FaceName, TEXT_FAMILY } from "./font_names.ts";
import { faceNames, fontFace } from "./fonts.ts";
import { type ClippedItems, lowestClips } from "./lowest_clips.ts";
import { type LowestImage, lowestImages } from "./lowest_images.ts";
import type { Metadata } from "./marks.ts";
import { packageFile } from "./package_file.ts";
import { outlineText } from "./outline_text.ts";
import { pathCoverage } from "./path_coverage.ts";
import { blankLines, pngOfLines, type Raster, type ScanLines } from "./png_file.ts";
import { svgText } from "./svg.ts";

/** How a picture is made into pixels. */
export interface PngOptions {
  /** Resolution, dots per inch. @default {300} */
  readonly dpi?: number;
  /** Facts for its metadata. @default {{}} */
  readonly metadata?: Metadata;
}

let ready: Promise<typeof import("@resvg/resvg-wasm")> | undefined;

async function startRenderer() {
  const library = await import("@resvg/resvg-wasm");
  await library.initWasm(packageFile(import.meta.resolve("@resvg/resvg-wasm/index_bg.wasm")));
  return library;
}

async function renderer(svg: string, options: { scale: number; faces: readonly FaceName[] }) {
  // The module may be started once in a process.
  ready ??= startRenderer();
  const { Resvg } = await ready;
  return new Resvg(svg, {
    fitTo: { mode: "zoom", value: options.scale },
    imageRendering: 1, // cells are already at the resolution of the output
    font: {
      fontBuffers: options.faces.map((name) => fontFace(name).bytes),
      defaultFontFamily: TEXT_FAMILY,
      serifFamily: TEXT_FAMILY,
    },
  });
}

/**
 * Draws a picture as a raster.
 *
 * @param picture The picture.
 * @param options Resolution.
 * @returns Its pixels.
 *
 * @example
 * ```ts
 * import { pictureRaster } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const square = { kind: "path", d: "M0,0L36,0L36,72L0,72Z", fill: "#ff0000" } as const;
 * const picture = { width: 72, height: 72, items: [square], title: "Half", description: "Half red" };
 * const { columns, rgb } = await pictureRaster(picture, { dpi: 10 });
 * assertEquals(columns, 10);
 * assertEquals([...rgb.subarray(0, 3)], [255, 0, 0]);
 * ```
 */
export async function pictureRaster(picture: Picture, options: PngOptions = {}): Promise<Raster> {
  const { columns, rows, lines } = await drawLines(picture, options.dpi ?? 300);
  const rgb = new Uint8Array(rows * columns * 3);
  for (let row = 0, at = 1; row < rows; row++, at += 1 + 3 * columns) {
    rgb.set(lines.subarray(at, at + 3 * columns), row * 3 * columns);
  }
  return { columns, rows, rgb };
}

async function drawLines(picture: Picture, dpi: number): Promise<ScanLines> {
  const scale = dpi / 72;
  // Pixels of large images are copied here many times faster than in the renderer.
  const { images, rest } = lowestImages(picture);
  // Setting text takes the renderer longer than all the rest, when it has just been started. A clipped
  // group takes it a layer and a mask of the group's size: on a canvas of its own it needs neither.
  const { clipped, rest: free } = lowestClips(outlineText(rest));
  const svg = svgOf(free, scale);
  // Before the renderer runs: it keeps the compiler's thread busy for a while.
  const paper = (columns: number, rows: number): ScanLines => {
    const canvas = blankLines({ columns, rows });
    for (const one of images) paintImage(canvas, one, scale);
    return canvas;
  };
  let canvas = paper(Math.round(picture.width * scale), Math.round(picture.height * scale));
  // The renderer takes a point in the size attributes as 96/72 pixels; state user units instead.
  const units = svg.replace(/(width|height)="([\d.]+)pt"/g, '$1="$2"');
  const resvg = await renderer(units, { scale, faces: [] });
  try {
    const drawn = resvg.render();
    const { width, height } = drawn;
    if (canvas.columns !== width || canvas.rows !== height) canvas = paper(width, height);
    // As the renderer does it, the picture just fills its whole pixels.
    const zoom = [width / picture.width, height / picture.height] as const;
    for (const one of clipped) await drawClipped(canvas, one, { scale, zoom });
    layOver(canvas, drawn.pixels, { left: 0, top: 0, columns: width, rows: height });
    drawn.free();
    return canvas;
  } finally {
    resvg.free();
  }
}

function svgOf(picture: Picture, scale: number): string {
  return svgText(picture, {
    embed_fonts: false,
    rasterise(image) {
      const columns = Math.max(1, Math.round(image.width * scale));
      const rows = Math.max(1, Math.round(image.height * scale));
      return pngOfLines(resampleCells(image, { columns, rows }), { level: 1 });
    },
  });
}

/** Draws clipped items on a canvas of whole pixels that holds what is seen of them, and lays that over. */
async function drawClipped(
  canvas: ScanLines,
  one: ClippedItems,
  options: { readonly scale: number; readonly zoom: readonly [x: number, y: number] },
): Promise<void> {
  const { scale, zoom: [zx, zy] } = options;
  const { box, shift, clip } = one;
  const left = Math.max(0, Math.floor(box.x * scale));
  const top = Math.max(0, Math.floor(box.y * scale));
  const columns = Math.min(canvas.columns, Math.ceil((box.x + box.width) * scale)) - left;
  const rows = Math.min(canvas.rows, Math.ceil((box.y + box.height) * scale)) - top;
  if (columns <= 0 || rows <= 0) return;
  const [x, y] = shift;
  const items: Item[] = [{ kind: "group", x, y, items: one.items }];
  const svg = svgOf({ width: columns, height: rows, items, title: "", description: "" }, scale);
  const view = `${left / zx} ${top / zy} ${columns / zx} ${rows / zy}`;
  const cut = svg.replace(
    /width="[^"]*" height="[^"]*" viewBox="[^"]*"/,
    `width="${columns}" height="${rows}" viewBox="${view}" preserveAspectRatio="none"`,
  );
  const resvg = await renderer(cut, { scale: 1, faces: [] });
  try {
    const drawn = resvg.render();
    const place = { left, top, columns, rows };
    layOver(canvas, drawn.pixels, pathCoverage(clip, { ...place, scale, shift }));
    drawn.free();
  } finally {
    resvg.free();
  }
}

function paintImage(canvas: ScanLines, { image, clip }: LowestImage, scale: number): void {
  const place = {
    x: image.x * scale,
    y: image.y * scale,
    width: image.width * scale,
    height: image.height * scale,
  };
  if (clip === null) return paintCells(canvas, image, place);
  const [left, top] = [Math.floor(place.x), Math.floor(place.y)];
  const columns = Math.ceil(place.x + place.width) - left;
  const rows = Math.ceil(place.y + place.height) - top;
  const cover = pathCoverage(clip.d, { left, top, columns, rows, scale, shift: clip.shift });
  paintCells(canvas, image, { ...place, cover });
}

/** Lays pixels with transparency, their colours multiplied by it, over opaque ones, as far as they are covered. */
function layOver(
  canvas: ScanLines,
  rgba: Uint8Array,
  place: Omit<Coverage, "parts"> & { readonly parts?: Float32Array },
): void {
  const { lines } = canvas;
  const { left, top, columns, rows, parts } = place;
  // Most pixels are clear: four bytes are looked at in one go.
  const words = new Uint32Array(rgba.buffer, rgba.byteOffset, columns * rows);
  for (let row = 0, n = 0; row < rows; row++) {
    let j = (top + row) * (1 + 3 * canvas.columns) + 1 + 3 * left;
    for (const end = n + columns; n < end; n++, j += 3) {
      if (words[n] === 0) continue;
      const i = 4 * n;
      const part = parts === undefined ? 1 : parts[n]!;
      const through = (255 - part * rgba[i + 3]!) / 255;
      lines[j] = part * rgba[i]! + through * lines[j]! + 0.5;
      lines[j + 1] = part * rgba[i + 1]! + through * lines[j + 1]! + 0.5;
      lines[j + 2] = part * rgba[i + 2]! + through * lines[j + 2]! + 0.5;
    }
  }
}

/**
 * Draws a picture as a PNG file at a stated resolution. Letters are drawn as outlines, without kerning.
 *
 * @param picture The picture.
 * @param options Resolution and metadata.
 * @returns The bytes of the file: the same picture gives the same bytes.
 *
 * @example
 * ```ts
 * import { pngBytes } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const picture = { width: 72, height: 36, items: [], title: "Blank", description: "Nothing" };
 * const bytes = await pngBytes(picture, { dpi: 100 });
 * assertEquals(new DataView(bytes.buffer).getUint32(16), 100); // width
 * ```
 */
export async function pngBytes(picture: Picture, options: PngOptions = {}): Promise<Uint8Array> {
  const { dpi = 300, metadata = {} } = options;
  const raster = await drawLines(picture, dpi);
  const facts = { Title: picture.title, Description: picture.description, ...metadata };
  return pngOfLines(raster, { dpi, metadata: facts });
}

/**
 * Draws a picture as SVG with every letter as an outline, for journals and viewers without the font.
 *
 * @param picture The picture.
 * @param options Metadata.
 * @returns The SVG document.
 *
 * @example
 * ```ts
 * import { outlinedSvg } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const text = { kind: "text", x: 5, y: 15, size_pt: 8, runs: [{ text: "km" }] } as const;
 * const picture = { width: 60, height: 20, items: [text], title: "Unit", description: "A unit" };
 * const svg = await outlinedSvg(picture);
 * assert(!svg.includes("<text"));
 * ```
 */
export async function outlinedSvg(
  picture: Picture,
  options: { readonly metadata?: Metadata } = {},
): Promise<string> {
  const svg = svgText(picture, { ...options, embed_fonts: false });
  const resvg = await renderer(svg, { scale: 1, faces: faceNames });
  try {
    const kept = svg.match(/<title[\s\S]*?<\/metadata>/)?.[0] ?? "";
    return resvg.toString().replace(/(<svg[^>]*>)/, `$1\n${kept}`);
  } finally {
    resvg.free();
  }
}
