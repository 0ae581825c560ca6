import { Buffer } from "node:buffer";
import { resampleCells } from "./cells.ts";
import type { Group, ImageItem, Item, PathItem, Picture, TextItem } from "./display_list.ts";
import { trim } from "./display_list.ts";
import { facePieces, faces, FALLBACK_FAMILY, TEXT_FAMILY, textWidth } from "./fonts.ts";
import { type Metadata, SOFTWARE } from "./marks.ts";
import { pngFile } from "./png_file.ts";
import { runStyle } from "./runs.ts";

/** How an SVG is written. */
export interface SvgOptions {
  /** Facts for its metadata. @default {{}} */
  readonly metadata?: Metadata;
  /** Begins every id, so that several figures can stand in one page. @default {"m"} */
  readonly id_prefix?: string;
  /**
   * Makes the pixels of an image: by default cells are repeated (up to 4 × 4), as some viewers smooth
   * what they should not.
   */
  readonly rasterise?: (image: ImageItem) => Uint8Array;
}

/** Halo of text over an image, in parts of its size. */
export const HALO_PART = 0.28;

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
  const { metadata = {}, id_prefix = "m", rasterise = repeatCells } = options;
  const context: Context = { prefix: id_prefix, clips: 0, rasterise };
  const body = picture.items.map((item) => draw(item, context)).join("\n");
  const width = trim(picture.width);
  const height = trim(picture.height);
  const facts = Object.entries(metadata).map(([key, value]) => `\n${key}: ${value}`).join("");
  return `<!-- ${SOFTWARE} -->
<svg xmlns="http://www.w3.org/2000/svg" width="${width}pt" height="${height}pt" ` +
    `viewBox="0 0 ${width} ${height}" role="img" ` +
    `aria-labelledby="${id_prefix}-title ${id_prefix}-desc">
<title id="${id_prefix}-title">${escape(picture.title)}</title>
<desc id="${id_prefix}-desc">${escape(picture.description)}</desc>
<metadata>${escape(`Software: ${SOFTWARE}${facts}`)}</metadata>
<g font-family="'${TEXT_FAMILY}', '${FALLBACK_FAMILY}', serif" font-weight="400" fill="none">
${body}
</g>
</svg>
`;
}

interface Context {
  readonly prefix: string;
  readonly rasterise: (image: ImageItem) => Uint8Array;
  clips: number;
}

function draw(item: Item, context: Context): string {
  switch (item.kind) {
    case "path":
      return drawPath(item);
    case "image":
      return drawImage(item, context);
    case "text":
      return drawText(item);
    case "group":
      return drawGroup(item, context);
  }
}

function drawPath(item: PathItem): string {
  if (item.d === "") return "";
  let paint = "";
  if (item.fill !== undefined) paint += ` fill="${item.fill}"`;
  if (item.fill_opacity !== undefined) paint += ` fill-opacity="${trim(item.fill_opacity)}"`;
  if (item.stroke !== undefined) {
    paint += ` stroke="${item.stroke}" stroke-width="${trim(item.stroke_pt ?? 0.5)}"`;
    paint += ` stroke-linejoin="round"`;
    if (item.stroke_opacity !== undefined) {
      paint += ` stroke-opacity="${trim(item.stroke_opacity)}"`;
    }
    if (item.cap === "round") paint += ` stroke-linecap="round"`;
    if (item.dash_pt?.length) paint += ` stroke-dasharray="${item.dash_pt.map(trim).join(" ")}"`;
  }
  return `<path d="${item.d}"${paint}/>`;
}

function repeatCells(image: ImageItem): Uint8Array {
  const times = Math.max(1, Math.min(4, Math.round(800 / Math.max(image.columns, image.rows))));
  const size = { columns: image.columns * times, rows: image.rows * times };
  return pngFile({ ...size, rgb: resampleCells(image, size) });
}

function drawImage(item: ImageItem, context: Context): string {
  const data = Buffer.from(context.rasterise(item)).toString("base64");
  return `<image x="${trim(item.x)}" y="${trim(item.y)}" width="${trim(item.width)}" ` +
    `height="${trim(item.height)}" preserveAspectRatio="none" ` +
    `style="image-rendering:pixelated" href="data:image/png;base64,${data}"/>`;
}

function drawText(item: TextItem): string {
  const { x, y, size_pt, anchor = "start", rotate_deg, halo, fill = "#000000" } = item;
  const pieces = item.runs.flatMap((run) =>
    facePieces(run).map((piece) => ({ ...piece, ...runStyle(run, size_pt) }))
  );
  // resvg sets a whole line in the fallback face when a part of it needs that face. A piece with a
  // place of its own is a line of its own; without one the viewer sets the line, kerning and all.
  const placed = pieces.some(({ face }) => face === "fallback");
  const part = anchor === "end" ? 1 : anchor === "middle" ? 0.5 : 0;
  let at = x - (placed ? part * textWidth(item.runs, size_pt) : 0);
  let shift = 0;
  const spans = pieces.map((piece) => {
    let attributes = placed ? ` x="${trim(at)}"` : "";
    if (piece.shift_pt !== shift) attributes += ` dy="${trim(piece.shift_pt - shift)}"`;
    if (piece.size_pt !== size_pt) attributes += ` font-size="${trim(piece.size_pt)}"`;
    if (piece.face === "italic") attributes += ` font-style="italic"`;
    if (piece.face === "fallback") attributes += ` font-family="'${FALLBACK_FAMILY}'"`;
    shift = piece.shift_pt;
    at += faces[piece.face].metrics.width(piece.text) * piece.size_pt;
    const words = escape(piece.text);
    return attributes === "" ? words : `<tspan${attributes}>${words}</tspan>`;
  });
  let style = `x="${trim(x)}" y="${trim(y)}" font-size="${trim(size_pt)}" fill="${fill}"`;
  if (anchor !== "start" && !placed) style += ` text-anchor="${anchor}"`;
  if (rotate_deg) style += ` transform="rotate(${trim(rotate_deg)} ${trim(x)} ${trim(y)})"`;
  if (halo !== undefined) {
    style += ` stroke="${halo}" stroke-width="${trim(HALO_PART * size_pt)}"`;
    style += ` stroke-linejoin="round" paint-order="stroke"`;
  }
  return `<text ${style} xml:space="preserve">${spans.join("")}</text>`;
}

function drawGroup(item: Group, context: Context): string {
  const { x = 0, y = 0, clip, name } = item;
  let attributes = "";
  let before = "";
  if (name !== undefined) attributes += ` data-name="${escape(name)}"`;
  if (x !== 0 || y !== 0) attributes += ` transform="translate(${trim(x)} ${trim(y)})"`;
  if (clip !== undefined) {
    const id = `${context.prefix}-clip${++context.clips}`;
    before = `<clipPath id="${id}"><path d="${clip}"/></clipPath>\n`;
    attributes += ` clip-path="url(#${id})"`;
  }
  const body = item.items.map((inner) => draw(inner, context)).filter((text) => text !== "");
  return `${before}<g${attributes}>\n${body.join("\n")}\n</g>`;
}

const entities: Readonly<Record<string, string>> = {
  "&": "&amp;",
  "<": "&lt;",
  ">": "&gt;",
  '"': "&quot;",
};

function escape(text: string): string {
  // Control characters cannot stand in XML at all.
  // deno-lint-ignore no-control-regex
  const legal = text.replace(/[\x00-\x08\x0b\x0c\x0e-\x1f]/g, "\ufffd");
  return legal.replace(/[&<>"]/g, (character) => entities[character]!);
}
