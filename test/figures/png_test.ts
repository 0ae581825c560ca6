import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { type Item, type Picture, pngBytes } from "../../engine/figures/mod.ts";
import { decodePng, pngChunks } from "./decode.ts";

function picture(...items: Item[]): Picture {
  return { width: 72, height: 36, items, title: "A title", description: "σ of it" };
}

Deno.test("pngBytes() states its resolution and has the pixels that it asks for", async () => {
  const bytes = await pngBytes(picture(), { dpi: 300 });
  const pixels = decodePng(bytes);
  assertEquals([pixels.columns, pixels.rows], [300, 150]);
  const physical = pngChunks(bytes).find((chunk) => chunk.type === "pHYs")!.data;
  // 300 dots per inch is 11811 per metre: PNG specification, section 11.3.5.3.
  assertEquals(new DataView(physical.slice().buffer).getUint32(0), 11811);
  assertEquals(physical[8], 1);
});

Deno.test("pngBytes() carries software, title and a description in UTF-8", async () => {
  const chunks = pngChunks(await pngBytes(picture(), { metadata: { Target: "x" } }));
  const plain = chunks.filter((chunk) => chunk.type === "tEXt")
    .map((chunk) => new TextDecoder().decode(chunk.data));
  assertEquals(plain, ["Software\0Millrace", "Title\0A title", "Target\0x"]);
  assertEquals(chunks.filter((chunk) => chunk.type === "iTXt").length, 1);
});

Deno.test("pngBytes() draws cells with sharp edges when they are enlarged", async () => {
  const rgb = new Uint8Array([255, 0, 0, 0, 0, 255]);
  const image = {
    kind: "image",
    x: 0,
    y: 0,
    width: 72,
    height: 36,
    columns: 2,
    rows: 1,
    rgb,
  } as const;
  const pixels = decodePng(await pngBytes(picture(image), { dpi: 100 }));
  assertEquals(pixels.at(48, 25), [255, 0, 0]);
  assertEquals(pixels.at(51, 25), [0, 0, 255]);
});

Deno.test("pngBytes() draws every sign with ink when the text face lacks it", async () => {
  for (const sign of ["☉", "⊙", "→", "≤", "≈", "∝", "γ", "Å", "−"]) {
    const text = { kind: "text", x: 20, y: 28, size_pt: 24, runs: [{ text: sign }] } as const;
    const pixels = decodePng(await pngBytes(picture(text), { dpi: 72 }));
    let ink = 0;
    for (let i = 0; i < 72 * 36; i++) ink += pixels.at(i % 72, Math.floor(i / 72))[0] < 128 ? 1 : 0;
    assert(ink > 5, sign);
  }
});

Deno.test("pngBytes() keeps the text face for the rest of a line when one sign needs the other", async () => {
  // The capital I has serifs in the text face and none in the fallback: its foot is wider than its waist.
  const runs = [{ text: "I ☉" }];
  const text = { kind: "text", x: 10, y: 30, size_pt: 30, runs } as const;
  const pixels = decodePng(await pngBytes(picture(text), { dpi: 300 }));
  const across = (row: number) => {
    let ink = 0;
    for (let column = 42; column < 85; column++) ink += pixels.at(column, row)[0] < 128 ? 1 : 0;
    return ink;
  };
  assert(across(123) > 1.8 * across(85), `${across(123)} ${across(85)}`);
});

Deno.test("pngBytes() blends half-covered pixels", async () => {
  const path = { kind: "path", d: "M0,0L36.5,0L36.5,36L0,36Z", fill: "#000000" } as const;
  const pixels = decodePng(await pngBytes(picture(path), { dpi: 72 }));
  assertAlmostEquals(pixels.at(36, 10)[0], 127.5, 2);
});
