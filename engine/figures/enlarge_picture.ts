import type { Item, Picture } from "./display_list.ts";
import { trim } from "./display_list.ts";

/**
 * The same picture larger or smaller, letters and lines with it: for a slide or a poster.
 *
 * @param picture The picture.
 * @param factor How many times as large.
 * @returns A new picture.
 *
 * @example
 * ```ts
 * import { enlargePicture } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const text = { kind: "text", x: 5, y: 15, size_pt: 8, runs: [{ text: "km" }] } as const;
 * const picture = { width: 60, height: 20, items: [text], title: "Unit", description: "A unit" };
 * const large = enlargePicture(picture, 2);
 * assertEquals([large.width, large.items[0]], [120, { ...text, x: 10, y: 30, size_pt: 16 }]);
 * ```
 */
export function enlargePicture(picture: Picture, factor: number): Picture {
  return {
    ...picture,
    width: picture.width * factor,
    height: picture.height * factor,
    items: picture.items.map((item) => enlarge(item, factor)),
  };
}

function enlarge(item: Item, factor: number): Item {
  switch (item.kind) {
    case "path":
      return {
        ...item,
        d: enlargePath(item.d, factor),
        ...(item.stroke === undefined ? {} : { stroke_pt: (item.stroke_pt ?? 0.5) * factor }),
        ...(item.dash_pt ? { dash_pt: item.dash_pt.map((length) => length * factor) } : {}),
      };
    case "image": {
      const { x, y, width, height } = item;
      return {
        ...item,
        x: x * factor,
        y: y * factor,
        width: width * factor,
        height: height * factor,
      };
    }
    case "text":
      return { ...item, x: item.x * factor, y: item.y * factor, size_pt: item.size_pt * factor };
    case "group":
      return {
        ...item,
        ...(item.x === undefined ? {} : { x: item.x * factor }),
        ...(item.y === undefined ? {} : { y: item.y * factor }),
        ...(item.clip === undefined ? {} : { clip: enlargePath(item.clip, factor) }),
        items: item.items.map((inner) => enlarge(inner, factor)),
      };
  }
}

/** Path data of M, L, C, Q and Z, in which every number is a coordinate. */
function enlargePath(d: string, factor: number): string {
  return d.replace(/-?\d+(?:\.\d+)?/g, (number) => trim(Number(number) * factor));
}
