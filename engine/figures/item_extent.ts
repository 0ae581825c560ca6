import type { Box, Group, ImageItem, Item, TextItem } from "./display_list.ts";
import { textWidth } from "./fonts.ts";

/** How far an item is shifted on the page, pt. */
export type Shift = readonly [x: number, y: number];

/** A box that holds what an item draws; null when it draws nothing. */
export function itemExtent(item: Exclude<Item, Group | ImageItem>, shift: Shift): Box | null {
  if (item.kind === "text") return textBox(item, shift);
  const box = pathBox(item.d, shift);
  return box && grown(box, item.stroke === undefined ? 0 : item.stroke_pt ?? 0.5);
}

/** A box that holds a path: control points hold a curve between them. */
export function pathBox(d: string, shift: Shift): Box | null {
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

/** Where two boxes overlap; of negative width or height when they do not. */
export function overlap(a: Box, b: Box): Box {
  const x = Math.max(a.x, b.x);
  const y = Math.max(a.y, b.y);
  return {
    x,
    y,
    width: Math.min(a.x + a.width, b.x + b.width) - x,
    height: Math.min(a.y + a.height, b.y + b.height) - y,
  };
}

/** Whether two boxes overlap. */
export function meet(a: Box, b: Box): boolean {
  const { width, height } = overlap(a, b);
  return width > 0 && height > 0;
}
