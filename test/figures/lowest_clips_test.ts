import { assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import {
  ellipsePath,
  type Item,
  lowestClips,
  type Picture,
  pictureRaster,
} from "../../engine/figures/mod.ts";

const clip = "M10.3,8.2L30.6,8.2L30.6,25.9L10.3,25.9Z";
const lines: Item[] = [
  { kind: "path", d: "M0,0L40,30", stroke: "#c63d19", stroke_pt: 2 },
  { kind: "path", d: "M5,20C15,0 25,40 38,12", stroke: "#0000ff", stroke_opacity: 0.5 },
  { kind: "path", d: "M20,3L40,3L40,15L20,15Z", fill: "#008000", fill_opacity: 0.3 },
];
const frame = { kind: "path", d: clip, stroke: "#000000", stroke_pt: 0.3 } as const;
const white = { kind: "path", d: "M0,0L44,0L44,34L0,34Z", fill: "#ffffff" } as const;

function picture(...items: Item[]): Picture {
  return { width: 44, height: 34, items, title: "", description: "" };
}

Deno.test("lowestClips() takes a clipped group that nothing lies under, with its shift", () => {
  const group = {
    kind: "group",
    x: 1,
    y: 2,
    items: [{ kind: "group", clip, items: lines }],
  } as const;
  const { clipped: [one], rest } = lowestClips(picture(group, frame));
  assertEquals([one!.shift, one!.clip, one!.items], [[1, 2], clip, lines]);
  assertAlmostEquals(one!.box.x, 11.3, 1e-9);
  assertEquals(rest.items, [{ ...group, items: [] }, frame]);
});

Deno.test("lowestClips() leaves a group in its place when something lies under it", () => {
  const group = { kind: "group", clip, items: lines } as const;
  assertEquals(lowestClips(picture(white, group)).clipped.length, 0);
  const aside = { kind: "path", d: "M0,0L5,0L5,5Z", fill: "#00ff00" } as const;
  assertEquals(lowestClips(picture(aside, group)).clipped.length, 1);
});

// Source: the renderer's own clipping, which a white sheet under the group asks for. On the clip's edge the
// renderer knows quarters of a pixel, and we areas; elsewhere colours differ by rounding.
for (const [name, outline] of [["a box", clip], ["a circle", ellipsePath([21, 17], { rx: 13 })]]) {
  Deno.test(`pictureRaster() draws what is clipped to ${name} as the renderer does`, async () => {
    const group = { kind: "group", x: 0.7, y: 0.4, clip: outline!, items: lines } as const;
    const own = await pictureRaster(picture(group, frame), { dpi: 144 });
    const theirs = await pictureRaster(picture(white, group, frame), { dpi: 144 });
    const off = own.rgb.map((c, i) => Math.abs(c - theirs.rgb[i]!));
    assertLess(Math.max(...off), 64);
    assertLess(off.filter((one) => one > 2).length / off.length, 0.01);
  });
}
