import { initWasm, Resvg } from "@resvg/resvg-wasm";
import { resampleCells } from "./cells.ts";
import { type Picture } from "./display_list.ts";
import { TEXT_FAMILY } from "./font_names.ts";
import { faceNames, fontFace } from "./fonts.ts";
import { packageFile } from "./package_file.ts";
import type { Metadata } from "./marks.ts";
import { pngFile, type Raster } from "./png_file.ts";
import { svgText } from "./svg.ts";

/** How a picture is made into pixels. */
export interface PngOptions {
  /** Resolution, dots per inch. @default {300} */
  readonly dpi?: number;
  /** Facts for its metadata. @default {{}} */
  readonly metadata?: Metadata;
}

let ready: Promise<void> | undefined;

async function renderer(svg: string, scale: number): Promise<InstanceType<typeof Resvg>> {
  // The module may be started once in a process.
  ready ??= initWasm(packageFile(import.meta.resolve("@resvg/resvg-wasm/index_bg.wasm")));
  await ready;
  return new Resvg(svg, {
    background: "#ffffff",
    fitTo: { mode: "zoom", value: scale },
    imageRendering: 1, // cells are already at the resolution of the output
    font: {
      fontBuffers: faceNames.map((name) => fontFace(name).bytes),
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
  const { dpi = 300 } = options;
  const scale = dpi / 72;
  const svg = svgText(picture, {
    embed_fonts: false, // the renderer has them
    rasterise(image) {
      const columns = Math.max(1, Math.round(image.width * scale));
      const rows = Math.max(1, Math.round(image.height * scale));
      const rgb = resampleCells(image, { columns, rows });
      return pngFile({ columns, rows, rgb }, { level: 1 });
    },
  });
  // The renderer takes a point in the size attributes as 96/72 pixels; state user units instead.
  const resvg = await renderer(svg.replace(/(width|height)="([\d.]+)pt"/g, '$1="$2"'), scale);
  try {
    const image = resvg.render();
    const { width: columns, height: rows } = image;
    const rgb = withoutAlpha(image.pixels);
    image.free();
    return { columns, rows, rgb };
  } finally {
    resvg.free();
  }
}

/** Red, green, blue of each pixel: the paper under the picture is opaque. */
function withoutAlpha(rgba: Uint8Array): Uint8Array {
  const rgb = new Uint8Array(rgba.length / 4 * 3);
  for (let i = 0, j = 0; i < rgba.length; i += 4) {
    rgb[j++] = rgba[i]!;
    rgb[j++] = rgba[i + 1]!;
    rgb[j++] = rgba[i + 2]!;
  }
  return rgb;
}

/**
 * Draws a picture as a PNG file at a stated resolution.
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
  const raster = await pictureRaster(picture, options);
  const facts = { Title: picture.title, Description: picture.description, ...metadata };
  return pngFile(raster, { dpi, metadata: facts });
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
  const resvg = await renderer(svg, 1);
  try {
    const kept = svg.match(/<title[\s\S]*?<\/metadata>/)?.[0] ?? "";
    return resvg.toString().replace(/(<svg[^>]*>)/, `$1\n${kept}`);
  } finally {
    resvg.free();
  }
}
