import type { Box, Group, ImageItem, Item, Picture } from "./display_list.ts";
import { itemExtent, meet, overlap, pathBox, type Shift } from "./item_extent.ts";

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
        : itemExtent(item, around.shift);
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
