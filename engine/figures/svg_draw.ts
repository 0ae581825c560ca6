import type { Group, ImageItem, Item, PathItem, Picture, Run, TextItem } from "./display_list.ts";
import { trim } from "./display_list.ts";
import { type FacePiece, FALLBACK_FAMILY, TEXT_FAMILY } from "./font_names.ts";
import { type Metadata, SOFTWARE } from "./marks.ts";
import { runStyle } from "./runs.ts";

/** What drawing SVG takes from its surroundings: the program's own, or a browser's. */
export interface SvgTools {
  /** Address of an image's pixels: a `data:` URL. */
  readonly image_url: (image: ImageItem) => string;
  /** Splits a run into pieces that one face each can write. */
  readonly pieces: (run: Run) => readonly FacePiece[];
  /** Width of a piece, in units of its size. */
  readonly piece_width: (piece: FacePiece) => number;
  /** Facts for the metadata. @default {{}} */
  readonly metadata?: Metadata;
  /** Begins every id. @default {"m"} */
  readonly id_prefix?: string;
  /** A style sheet to put in; none when absent. */
  readonly style?: string;
}

/** Halo of text over an image, in parts of its size. */
export const HALO_PART = 0.28;

/**
 * Draws a picture as SVG with the tools that it is given. Programs use {@linkcode svgText}.
 *
 * @param picture The picture.
 * @param tools Images, faces, metadata.
 * @returns The SVG document.
 *
 * @example
 * ```ts
 * import { drawSvg } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const text = { kind: "text", x: 5, y: 15, size_pt: 8, runs: [{ text: "km" }] } as const;
 * const svg = drawSvg({ width: 60, height: 20, items: [text], title: "Unit", description: "A unit" }, {
 *   image_url: () => "",
 *   pieces: (run) => [{ text: run.text, face: "regular" }],
 *   piece_width: () => 1,
 * });
 * assert(svg.includes(">km</text>"));
 * ```
 */
export function drawSvg(picture: Picture, tools: SvgTools): string {
  const { metadata = {}, id_prefix = "m", style } = tools;
  const body = drawSvgItems(picture.items, tools);
  const width = trim(picture.width);
  const height = trim(picture.height);
  const facts = Object.entries(metadata).map(([key, value]) => `\n${key}: ${value}`).join("");
  const sheet = style === undefined ? "" : `\n<style>${style}</style>`;
  return `<!-- ${SOFTWARE} -->
<svg xmlns="http://www.w3.org/2000/svg" width="${width}pt" height="${height}pt" ` +
    `viewBox="0 0 ${width} ${height}" role="img" ` +
    `aria-labelledby="${id_prefix}-title ${id_prefix}-desc">
<title id="${id_prefix}-title">${escapeMarkup(picture.title)}</title>
<desc id="${id_prefix}-desc">${escapeMarkup(picture.description)}</desc>
<metadata>${escapeMarkup(`Software: ${SOFTWARE}${facts}`)}</metadata>${sheet}
${body}
</svg>
`;
}

/**
 * Draws items as an SVG group, for a drawing laid over another.
 *
 * @param items The items.
 * @param tools Images, faces, ids.
 * @returns A `g` element.
 *
 * @example
 * ```ts
 * import { drawSvgItems } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const svg = drawSvgItems([{ kind: "path", d: "M0,0L1,1", stroke: "#000000" }], {
 *   image_url: () => "",
 *   pieces: () => [],
 *   piece_width: () => 1,
 * });
 * assert(svg.includes('d="M0,0L1,1"'));
 * ```
 */
export function drawSvgItems(items: readonly Item[], tools: SvgTools): string {
  const context: Context = { tools, prefix: tools.id_prefix ?? "m", clips: 0 };
  const body = items.map((item) => draw(item, context)).filter((text) => text !== "").join("\n");
  const family = `'${TEXT_FAMILY}', serif`;
  return `<g font-family="${family}" font-weight="400" fill="none">\n${body}\n</g>`;
}

interface Context {
  readonly tools: SvgTools;
  readonly prefix: string;
  clips: number;
}

function draw(item: Item, context: Context): string {
  switch (item.kind) {
    case "path":
      return drawPath(item);
    case "image":
      return drawImage(item, context);
    case "text":
      return drawText(item, context.tools);
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

function drawImage(item: ImageItem, context: Context): string {
  const href = context.tools.image_url(item);
  return `<image x="${trim(item.x)}" y="${trim(item.y)}" width="${trim(item.width)}" ` +
    `height="${trim(item.height)}" preserveAspectRatio="none" ` +
    `style="image-rendering:pixelated" href="${href}"/>`;
}

function drawText(item: TextItem, tools: SvgTools): string {
  const { x, y, size_pt, anchor = "start", rotate_deg, halo, fill = "#000000" } = item;
  const pieces = item.runs.flatMap((run) =>
    tools.pieces(run).map((piece) => {
      const style = runStyle(run, size_pt);
      return { ...piece, ...style, width: tools.piece_width(piece) * style.size_pt };
    })
  );
  // resvg sets a whole line in the fallback face when a part of it needs that face. A piece with a
  // place of its own is a line of its own; without one the viewer sets the line, kerning and all.
  const placed = pieces.some(({ face }) => face === "fallback");
  const part = anchor === "end" ? 1 : anchor === "middle" ? 0.5 : 0;
  let at = x - (placed ? part * pieces.reduce((sum, piece) => sum + piece.width, 0) : 0);
  let shift = 0;
  const spans = pieces.map((piece) => {
    let attributes = placed ? ` x="${trim(at)}"` : "";
    if (piece.shift_pt !== shift) attributes += ` dy="${trim(piece.shift_pt - shift)}"`;
    if (piece.size_pt !== size_pt) attributes += ` font-size="${trim(piece.size_pt)}"`;
    if (piece.face === "italic") attributes += ` font-style="italic"`;
    if (piece.face === "fallback") attributes += ` font-family="'${FALLBACK_FAMILY}', sans-serif"`;
    shift = piece.shift_pt;
    at += piece.width;
    const words = escapeMarkup(piece.text);
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
  if (name !== undefined) attributes += ` data-name="${escapeMarkup(name)}"`;
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

/**
 * Text as it may stand in SVG and HTML, in an element or an attribute.
 *
 * @param text Any text.
 * @returns The text with its special characters named, control characters replaced.
 *
 * @example
 * ```ts
 * import { escapeMarkup } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(escapeMarkup('<a href="x">&'), "&lt;a href=&quot;x&quot;&gt;&amp;");
 * ```
 */
export function escapeMarkup(text: string): string {
  // Control characters cannot stand in XML at all.
  // deno-lint-ignore no-control-regex
  const legal = text.replace(/[\x00-\x08\x0b\x0c\x0e-\x1f]/g, "\ufffd");
  return legal.replace(/[&<>"]/g, (character) => entities[character]!);
}
