import type { Box, Group, ImageItem, Item, Picture, TextItem } from "./display_list.ts";
import { textWidth } from "./fonts.ts";

/** An image with its place on the page. */
export interface LowestImage {
  /** The image; its place is that on the page. */
  readonly image: ImageItem;
  /** Path data outside which it is not seen, and the shift of that path; null for none. */
  readonly clip: { readonly d: string; readonly shift: readonly [x: number, y: number] } | null;
}

/**
 * Parts a picture into the images that nothing lies under, and all the rest: the images may be painted
 * first, by other means, and the rest over them.
 *
 * @param picture The picture.
 * @returns The images in their order, and the picture without them.
 *
 * @example
 * ```ts
 * import { lowestImages } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const image = {
 *   kind: "image", x: 1, y: 1, width: 8, height: 8, columns: 1, rows: 1, rgb: new Uint8Array(3),
 * } as const;
 * const line = { kind: "path", d: "M0,0L9,9", stroke: "#000000" } as const;
 * const picture = { width: 10, height: 10, title: "", description: "" };
 * assertEquals(lowestImages({ ...picture, items: [image, line] }).images.length, 1);
 * assertEquals(lowestImages({ ...picture, items: [line, image] }).images.length, 0);
 * ```
 */
export function lowestImages(picture: Picture): { images: LowestImage[]; rest: Picture } {
  const images: LowestImage[] = [];
  const below: Box[] = []; // what has been drawn and stays
  const part = (items: readonly Item[], around: Around): Item[] =>
    items.flatMap((item): Item[] => {
      const [dx, dy] = around.shift;
      if (item.kind === "group") {
        return [{ ...item, items: part(item.items, within(around, item)) }];
      }
      const box = item.kind === "image"
        ? { ...item, x: item.x + dx, y: item.y + dy }
        : extent(item, around.shift);
      if (box === null) return [item];
      const seen = around.clips.reduce((rest, clip) => overlap(rest, clip.box), box as Box);
      const free = around.clips.length <= 1 && !below.some((other) => meet(other, seen));
      if (item.kind === "image" && free) {
        images.push({ image: box as ImageItem, clip: around.clips[0] ?? null });
        return [];
      }
      below.push(seen);
      return [item];
    });
  const rest = { ...picture, items: part(picture.items, { shift: [0, 0], clips: [] }) };
  return { images, rest };
}

type Shift = readonly [x: number, y: number];

/** The groups around an item. */
interface Around {
  readonly shift: Shift;
  readonly clips: readonly { readonly d: string; readonly shift: Shift; readonly box: Box }[];
}

function within(around: Around, group: Group): Around {
  const { x = 0, y = 0, clip } = group;
  const shift = [around.shift[0] + x, around.shift[1] + y] as const;
  const clips = clip === undefined
    ? around.clips
    : [...around.clips, { d: clip, shift, box: pathBox(clip, shift) ?? NOTHING }];
  return { shift, clips };
}

const NOTHING: Box = { x: 0, y: 0, width: 0, height: 0 };

/** A box that holds what an item draws; null when it draws nothing. */
function extent(item: Exclude<Item, Group | ImageItem>, shift: Shift): Box | null {
  if (item.kind === "text") return textBox(item, shift);
  const box = pathBox(item.d, shift);
  return box && grown(box, item.stroke === undefined ? 0 : item.stroke_pt ?? 0.5);
}

/** Control points hold a curve between them. */
function pathBox(d: string, shift: Shift): Box | null {
  const low = [Infinity, Infinity];
  const high = [-Infinity, -Infinity];
  let axis = 0;
  for (const [text] of d.matchAll(/-?\d+(?:\.\d+)?/g)) {
    const value = Number(text) + shift[axis]!;
    if (value < low[axis]!) low[axis] = value;
    if (value > high[axis]!) high[axis] = value;
    axis = 1 - axis;
  }
  if (low[0] === Infinity) return null;
  return { x: low[0]!, y: low[1]!, width: high[0]! - low[0]!, height: high[1]! - low[1]! };
}

function textBox(item: TextItem, shift: Shift): Box {
  const { size_pt, anchor = "start", rotate_deg = 0, halo } = item;
  const width = textWidth(item.runs, size_pt);
  const part = anchor === "end" ? 1 : anchor === "middle" ? 0.5 : 0;
  // Letters and scripts keep between these heights, in parts of the size.
  const box = { x: -part * width, y: -size_pt, width, height: 1.4 * size_pt };
  const angle = rotate_deg * Math.PI / 180;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  const corners = [[box.x, box.y], [box.x + width, box.y], [box.x, box.y + box.height], [
    box.x + width,
    box.y + box.height,
  ]].map(([u, v]) => [u! * cos - v! * sin, u! * sin + v! * cos] as const);
  const xs = corners.map(([u]) => u + item.x + shift[0]);
  const ys = corners.map(([, v]) => v + item.y + shift[1]);
  const [x, y] = [Math.min(...xs), Math.min(...ys)];
  const turned = { x, y, width: Math.max(...xs) - x, height: Math.max(...ys) - y };
  return halo === undefined ? turned : grown(turned, 0.3 * size_pt);
}

function grown(box: Box, by: number): Box {
  return {
    x: box.x - by / 2,
    y: box.y - by / 2,
    width: box.width + by,
    height: box.height + by,
  };
}

function overlap(a: Box, b: Box): Box {
  const x = Math.max(a.x, b.x);
  const y = Math.max(a.y, b.y);
  return {
    x,
    y,
    width: Math.min(a.x + a.width, b.x + b.width) - x,
    height: Math.min(a.y + a.height, b.y + b.height) - y,
  };
}

function meet(a: Box, b: Box): boolean {
  const { width, height } = overlap(a, b);
  return width > 0 && height > 0;
}
