import { assertEquals } from "@std/assert";
import {
  type Group,
  type ImageItem,
  type Item,
  lowestImages,
  type Picture,
  pictureRaster,
  standardPlate,
  svgText,
} from "../../engine/figures/mod.ts";
import { exampleContent } from "./example_content.ts";

const image: ImageItem = {
  kind: "image",
  x: 10,
  y: 10,
  width: 20,
  height: 20,
  columns: 1,
  rows: 1,
  rgb: new Uint8Array([200, 0, 0]),
};
const green = { kind: "path", fill: "#00ff00" } as const;

function picture(...items: Item[]): Picture {
  return { width: 40, height: 40, items, title: "", description: "" };
}

async function pixel(of: Picture, column: number, row: number): Promise<number[]> {
  const { columns, rgb } = await pictureRaster(of, { dpi: 72 });
  return [...rgb.subarray(3 * (row * columns + column), 3 * (row * columns + column) + 3)];
}

Deno.test("lowestImages() takes all large images of the standard plate", () => {
  const { images, rest } = lowestImages(standardPlate(exampleContent()));
  assertEquals(images.length, 7); // a map, three trails, three colour bars
  assertEquals(svgText(rest).includes("<image"), false);
});

Deno.test("lowestImages() leaves an image in its place when something lies under it", async () => {
  const under = { ...green, d: "M0,0L15,0L15,15L0,15Z" };
  const aside = { ...green, d: "M0,0L9,0L9,9L0,9Z" };
  assertEquals(lowestImages(picture(under, image)).images.length, 0);
  assertEquals(lowestImages(picture(aside, image)).images.length, 1);
  // Either way what comes later hides what came before.
  assertEquals(await pixel(picture(under, image), 12, 12), [200, 0, 0]);
  assertEquals(await pixel(picture(image, under), 12, 12), [0, 255, 0]);
});

Deno.test("lowestImages() keeps shifts and clips of the groups around an image", async () => {
  const clipped: Group = {
    kind: "group",
    x: 5,
    y: -2,
    clip: "M10,10L20,10L20,30L10,30Z",
    items: [image],
  };
  const shown = picture(clipped);
  const [first] = lowestImages(shown).images;
  assertEquals([first!.image.x, first!.image.y, first!.clip?.shift], [15, 8, [5, -2]]);
  assertEquals(await pixel(shown, 24, 9), [200, 0, 0]);
  assertEquals(await pixel(shown, 26, 9), [255, 255, 255]); // beyond the clip
  assertEquals(await pixel(shown, 14, 9), [255, 255, 255]); // left of the image
  assertEquals(await pixel(shown, 24, 29), [255, 255, 255]); // below it
});

Deno.test("lowestImages() leaves an image within two clips to the renderer", async () => {
  const inner: Group = { kind: "group", clip: "M10,10L30,10L30,20L10,20Z", items: [image] };
  const twice = picture({ kind: "group", clip: "M10,10L20,10L20,30L10,30Z", items: [inner] });
  assertEquals(lowestImages(twice).images.length, 0);
  assertEquals(await pixel(twice, 15, 15), [200, 0, 0]);
  assertEquals(await pixel(twice, 15, 25), [255, 255, 255]);
  assertEquals(await pixel(twice, 25, 15), [255, 255, 255]);
});
