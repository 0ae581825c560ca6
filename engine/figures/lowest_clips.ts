import type { Box, Group, Item, Picture } from "./display_list.ts";
import { itemExtent, meet, pathBox, type Shift } from "./item_extent.ts";

/** Clipped items with their place on the page. */
export interface ClippedItems {
  /** The items, without the shift. */
  readonly items: readonly Item[];
  /** Path data outside which they are not seen, before the shift. */
  readonly clip: string;
  /** Shift of items and path. */
  readonly shift: readonly [x: number, y: number];
  /** A box that holds what is seen of them. */
  readonly box: Box;
}

/**
 * Parts a picture into the clipped groups that nothing lies under, and all the rest: a renderer that
 * clips slowly may draw each group on a canvas of its own first, and the rest over them.
 *
 * @param picture The picture, without text items.
 * @returns The groups in their order, and the picture without them.
 *
 * @example
 * ```ts
 * import { lowestClips } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const line = { kind: "path", d: "M0,0L9,9", stroke: "#000000" } as const;
 * const group = { kind: "group", clip: "M1,1L5,1L5,5L1,5Z", items: [line] } as const;
 * const picture = { width: 10, height: 10, title: "", description: "" };
 * assertEquals(lowestClips({ ...picture, items: [group, line] }).clipped.length, 1);
 * assertEquals(lowestClips({ ...picture, items: [line, group] }).clipped.length, 0);
 * ```
 */
export function lowestClips(picture: Picture): { clipped: ClippedItems[]; rest: Picture } {
  const clipped: ClippedItems[] = [];
  const below: Box[] = []; // what has been drawn and stays
  const part = (items: readonly Item[], around: Shift): Item[] =>
    items.flatMap((item): Item[] => {
      if (item.kind !== "group") {
        const [x, y] = around;
        const box = item.kind === "image"
          ? { ...item, x: item.x + x, y: item.y + y }
          : itemExtent(item, around);
        if (box !== null) below.push(box);
        return [item];
      }
      const shift = [around[0] + (item.x ?? 0), around[1] + (item.y ?? 0)] as const;
      if (item.clip === undefined) return [{ ...item, items: part(item.items, shift) }];
      const box = pathBox(item.clip, shift);
      if (box === null || item.items.length === 0) return [];
      if (holdsImage(item) || below.some((other) => meet(other, box))) {
        below.push(box);
        return [item];
      }
      clipped.push({ items: item.items, clip: item.clip, shift, box });
      return [];
    });
  const rest = { ...picture, items: part(picture.items, [0, 0]) };
  return { clipped, rest };
}

function holdsImage({ items }: Group): boolean {
  return items.some((item) => item.kind === "image" || (item.kind === "group" && holdsImage(item)));
}
