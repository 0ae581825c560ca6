import { assertEquals } from "@std/assert";
import { resampleCells } from "../../engine/figures/mod.ts";

function image(columns: number, rows: number, reds: readonly number[]) {
  const rgb = new Uint8Array(columns * rows * 3);
  reds.forEach((red, i) => rgb[3 * i] = red);
  return { kind: "image", x: 0, y: 0, width: 1, height: 1, columns, rows, rgb } as const;
}

function reds(rgb: Uint8Array): number[] {
  return [...rgb].filter((_, i) => i % 3 === 0);
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
