import { type Item, type PathItem, type Picture, type TextItem, trim } from "./display_list.ts";
import type { FaceName } from "./font_names.ts";
import { facePieces, fontFace } from "./fonts.ts";
import { type GlyphContours, glyphOutlines } from "./glyph_outlines.ts";
import { runStyle } from "./runs.ts";
import { HALO_PART } from "./svg_draw.ts";

/**
 * The same picture with every letter as an outline, for a renderer without fonts. Kerning is left out.
 *
 * @param picture The picture.
 * @returns A picture without text items.
 *
 * @example
 * ```ts
 * import { outlineText } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const text = { kind: "text", x: 5, y: 15, size_pt: 8, runs: [{ text: "km" }] } as const;
 * const picture = { width: 60, height: 20, items: [text], title: "Unit", description: "A unit" };
 * assertEquals(outlineText(picture).items.map((item) => item.kind), ["path"]);
 * ```
 */
export function outlineText(picture: Picture): Picture {
  return { ...picture, items: picture.items.flatMap(outlined) };
}

function outlined(item: Item): Item[] {
  if (item.kind === "group") return [{ ...item, items: item.items.flatMap(outlined) }];
  return item.kind === "text" ? letters(item) : [item];
}

const readers = new Map<FaceName, (glyph: number) => GlyphContours>();

function outlinesOf(face: FaceName): (glyph: number) => GlyphContours {
  const reader = readers.get(face) ?? glyphOutlines(fontFace(face).bytes);
  readers.set(face, reader);
  return reader;
}

function letters(item: TextItem): PathItem[] {
  const { x, y, size_pt, anchor = "start", rotate_deg = 0, halo, fill = "#000000" } = item;
  const pieces = item.runs.flatMap((run) =>
    facePieces(run).map((piece) => {
      const style = runStyle(run, size_pt);
      const width = fontFace(piece.face).metrics.width(piece.text) * style.size_pt;
      return { ...piece, ...style, width };
    })
  );
  const width = pieces.reduce((sum, piece) => sum + piece.width, 0);
  let at = anchor === "end" ? -width : anchor === "middle" ? -width / 2 : 0;
  const angle = rotate_deg * Math.PI / 180;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  let d = "";
  for (const { text, face, size_pt: size, shift_pt } of pieces) {
    const { metrics } = fontFace(face);
    for (const character of text) {
      const from = at;
      const place = (u: number, v: number): string => {
        const [along, down] = [from + u * size, shift_pt - v * size];
        return `${trim(x + along * cos - down * sin)},${trim(y + along * sin + down * cos)}`;
      };
      const contours = outlinesOf(face)(metrics.glyph(character.codePointAt(0)!));
      for (const contour of contours) d += contourPath(contour, place);
      at += metrics.width(character) * size;
    }
  }
  if (d === "") return [];
  return [
    ...(halo === undefined
      ? []
      : [{ kind: "path" as const, d, stroke: halo, stroke_pt: HALO_PART * size_pt }]),
    { kind: "path", d, fill },
  ];
}

/** Path data of a closed contour; between two control points in a row lies a point of the curve. */
function contourPath(
  contour: GlyphContours[number],
  place: (u: number, v: number) => string,
): string {
  const count = contour.length;
  if (count < 2) return "";
  const point = (i: number) => contour[i % count]!;
  const between = (a: { x: number; y: number }, b: { x: number; y: number }) => ({
    x: (a.x + b.x) / 2,
    y: (a.y + b.y) / 2,
  });
  const first = contour.findIndex(({ on }) => on);
  const start = first >= 0 ? point(first) : between(point(0), point(count - 1));
  let d = `M${place(start.x, start.y)}`;
  const from = first >= 0 ? first + 1 : 0;
  for (let i = 0; i < (first >= 0 ? count - 1 : count); i++) {
    const here = point(from + i);
    if (here.on) {
      d += `L${place(here.x, here.y)}`;
      continue;
    }
    const last = i === (first >= 0 ? count - 2 : count - 1);
    const next = point(from + i + 1);
    const end = last ? start : next.on ? next : between(here, next);
    d += `Q${place(here.x, here.y)} ${place(end.x, end.y)}`;
    if (!last && next.on) i++;
  }
  return `${d}Z`;
}
