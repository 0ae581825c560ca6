import { assertEquals } from "@std/assert";
import { blankLines, paintCells, resampleCells, type ScanLines } from "../../engine/figures/mod.ts";

function image(columns: number, rows: number, reds: readonly number[]) {
  const rgb = new Uint8Array(columns * rows * 3);
  reds.forEach((red, i) => rgb[3 * i] = red);
  return { kind: "image", x: 0, y: 0, width: 1, height: 1, columns, rows, rgb } as const;
}

function reds({ columns, rows, lines }: ScanLines): number[] {
  const at = (row: number, column: number) => lines[row * (1 + 3 * columns) + 1 + 3 * column]!;
  return Array.from({ length: rows * columns }, (_, i) => at(Math.floor(i / columns), i % columns));
}

Deno.test("resampleCells() gives the same cells when the size is the same", () => {
  const source = image(3, 2, [10, 20, 30, 40, 50, 60]);
  assertEquals(reds(resampleCells(source, { columns: 3, rows: 2 })), [10, 20, 30, 40, 50, 60]);
});

Deno.test("resampleCells() averages by area when pixels straddle cells", () => {
  // Three cells on two pixels: each takes one cell and half of the middle one.
  const source = image(3, 1, [0, 90, 240]);
  assertEquals(reds(resampleCells(source, { columns: 2, rows: 1 })), [30, 190]);
});

Deno.test("resampleCells() keeps the mean when shrinking and enlarging", () => {
  const source = image(7, 5, Array.from({ length: 35 }, (_, i) => i * 7));
  for (const size of [{ columns: 3, rows: 2 }, { columns: 31, rows: 12 }]) {
    const values = reds(resampleCells(source, size));
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
    assertEquals(Math.round(mean), 119);
  }
});

Deno.test("paintCells() blends with what is there when an edge lies within a pixel", () => {
  const canvas = blankLines({ columns: 4, rows: 3 });
  paintCells(canvas, image(1, 1, [55]), { x: 0.5, y: 0.75, width: 2.5, height: 1.25 });
  // By hand: columns covered by 0.5, 1, 1, 0 and rows by 0.25, 1, 0, of 255 paper under 55.
  const parts = [0.125, 0.25, 0.25, 0, 0.5, 1, 1, 0, 0, 0, 0, 0];
  assertEquals(reds(canvas), parts.map((part) => Math.round(255 - 200 * part)));
});

Deno.test("paintCells() paints no pixel that the outline leaves out", () => {
  const canvas = blankLines({ columns: 3, rows: 2 });
  const parts = new Float32Array([1, 0.5, 0, 0]);
  const cover = { left: 1, top: 0, columns: 2, rows: 2, parts };
  paintCells(canvas, image(1, 1, [55]), { x: 0, y: 0, width: 3, height: 2, cover });
  assertEquals(reds(canvas), [255, 55, 155, 255, 255, 255]);
});

Deno.test("paintCells() keeps within the canvas when the image reaches beyond it", () => {
  const canvas = blankLines({ columns: 2, rows: 1 });
  paintCells(canvas, image(4, 1, [10, 20, 30, 40]), { x: -1, y: 0, width: 4, height: 2 });
  assertEquals(reds(canvas), [20, 30]);
});
