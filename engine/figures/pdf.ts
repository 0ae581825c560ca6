import { Buffer } from "node:buffer";
import PDFDocument from "pdfkit";
import type { Group, ImageItem, Item, PathItem, Picture, TextItem } from "./display_list.ts";
import type { FaceName } from "./font_names.ts";
import { faceNames, facePieces, fontFace } from "./fonts.ts";
import { type Metadata, SOFTWARE } from "./marks.ts";
import { pngFile } from "./png_file.ts";
import { runStyle } from "./runs.ts";
import { HALO_PART } from "./svg_draw.ts";

/** How a PDF is written. */
export interface PdfOptions {
  /** Facts for its metadata. @default {{}} */
  readonly metadata?: Metadata;
}

type Document = InstanceType<typeof PDFDocument>;

/**
 * Draws a picture as a PDF of one page: fonts embedded as subsets, text selectable, cells crisp, alt text
 * for screen readers. It carries no date, so that the same picture gives the same bytes.
 *
 * @param picture The picture.
 * @param options Metadata.
 * @returns The bytes of the file.
 *
 * @example
 * ```ts
 * import { pdfBytes } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const picture = { width: 72, height: 36, items: [], title: "Blank", description: "Nothing" };
 * const bytes = await pdfBytes(picture);
 * assertEquals(new TextDecoder().decode(bytes.subarray(0, 5)), "%PDF-");
 * ```
 */
export function pdfBytes(picture: Picture, options: PdfOptions = {}): Promise<Uint8Array> {
  const { metadata = {} } = options;
  const facts = Object.entries(metadata).map(([key, value]) => `${key}: ${value}`).join("; ");
  const document = new PDFDocument({
    size: [picture.width, picture.height],
    margin: 0,
    pdfVersion: "1.5",
    tagged: true,
    displayTitle: true,
    lang: "en",
    // None to begin with: pdfkit would read a built-in one from the disc, or parse ours twice.
    font: null as unknown as string,
    info: {
      Title: picture.title,
      Subject: facts,
      Creator: SOFTWARE,
      Producer: SOFTWARE,
      CreationDate: new Date(0),
    },
  });
  for (const name of faceNames) {
    document.registerFont(name, Buffer.from(fontFace(name).bytes));
  }
  const bytes = collect(document);
  const figure = document.struct("Figure", { alt: picture.description }, () => {
    for (const item of picture.items) draw(document, item);
  });
  document.addStructure(figure);
  document.end();
  return bytes;
}

function collect(document: Document): Promise<Uint8Array> {
  return new Promise((resolve, reject) => {
    const parts: Uint8Array[] = [];
    document.on("data", (part: Uint8Array) => parts.push(part));
    document.on("error", reject);
    document.on("end", () => resolve(new Uint8Array(Buffer.concat(parts))));
  });
}

function draw(document: Document, item: Item): void {
  switch (item.kind) {
    case "path":
      return drawPath(document, item);
    case "image":
      return drawImage(document, item);
    case "text":
      return drawText(document, item);
    case "group":
      return drawGroup(document, item);
  }
}

function drawPath(document: Document, item: PathItem): void {
  if (item.d === "" || (item.fill === undefined && item.stroke === undefined)) return;
  document.save().path(item.d);
  if (item.fill !== undefined) document.fillColor(item.fill, item.fill_opacity ?? 1);
  if (item.stroke !== undefined) {
    document.strokeColor(item.stroke, item.stroke_opacity ?? 1);
    document.lineWidth(item.stroke_pt ?? 0.5).lineJoin("round").lineCap(item.cap ?? "butt");
    // The types know one length; the library takes a pattern.
    if (item.dash_pt?.length) document.dash(item.dash_pt as unknown as number, {});
  }
  if (item.fill !== undefined && item.stroke !== undefined) document.fillAndStroke();
  else if (item.fill !== undefined) document.fill();
  else document.stroke();
  document.restore();
}

function drawImage(document: Document, item: ImageItem): void {
  const png = Buffer.from(pngFile(item));
  document.image(png, item.x, item.y, { width: item.width, height: item.height });
}

function drawText(document: Document, item: TextItem): void {
  const pieces: Piece[] = [];
  let width = 0;
  for (const run of item.runs) {
    const { size_pt, shift_pt } = runStyle(run, item.size_pt);
    for (const { text, face } of facePieces(run)) {
      document.font(face).fontSize(size_pt);
      pieces.push({ text, face, size_pt, x: width, y: shift_pt });
      width += document.widthOfString(text);
    }
  }
  const start = item.anchor === "end" ? -width : item.anchor === "middle" ? -width / 2 : 0;
  document.save().translate(item.x, item.y);
  if (item.rotate_deg) document.rotate(item.rotate_deg);
  document.translate(start, 0);
  if (item.halo !== undefined) {
    document.strokeColor(item.halo).lineWidth(HALO_PART * item.size_pt).lineJoin("round");
    for (const piece of pieces) write(document, piece, true);
  }
  document.fillColor(item.fill ?? "#000000");
  for (const piece of pieces) write(document, piece, false);
  document.restore();
}

interface Piece {
  readonly text: string;
  readonly face: FaceName;
  readonly size_pt: number;
  readonly x: number;
  readonly y: number;
}

function write(document: Document, piece: Piece, outline: boolean): void {
  const style = {
    lineBreak: false,
    baseline: "alphabetic",
    fill: !outline,
    stroke: outline,
  } as const;
  document.font(piece.face).fontSize(piece.size_pt);
  document.text(piece.text, piece.x, piece.y, style);
}

function drawGroup(document: Document, item: Group): void {
  document.save().translate(item.x ?? 0, item.y ?? 0);
  if (item.clip !== undefined) document.path(item.clip).clip();
  for (const inner of item.items) draw(document, inner);
  document.restore();
}
