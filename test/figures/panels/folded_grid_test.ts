import { assertAlmostEquals, assertEquals } from "@std/assert";
import { foldedGrid } from "../../../engine/figures/mod.ts";

function grid(
  rows: readonly (readonly [phase: number, width: number, flux: number, error: number])[],
) {
  const column = (i: number) => Float64Array.from(rows, (row) => row[i]!);
  const shape = { rows: rows.length, columns: 1, first_kms: 0, step_kms: 1 };
  return { ...shape, phase: column(0), phase_width: column(1), flux: column(2), error: column(3) };
}

function folded(trail: ReturnType<typeof grid>, options = {}): number[] {
  return [...foldedGrid(trail, { cycles: 1, steps: 10, ...options }).values as Float64Array];
}

Deno.test("foldedGrid() leaves phases blank when no exposure covers them", () => {
  const values = folded(grid([[0.2, 0.2, 5, 1], [0.7, 0.2, 7, 1]]));
  assertEquals(values, [NaN, 5, 5, NaN, NaN, NaN, 7, 7, NaN, NaN]);
});

Deno.test("foldedGrid() wraps an exposure that crosses phase zero", () => {
  const values = folded(grid([[0.95, 0.22, 3, 1]]));
  assertEquals(values, [3, NaN, NaN, NaN, NaN, NaN, NaN, NaN, 3, 3]);
});

Deno.test("foldedGrid() closes the gap of a read-out and leaves a true gap", () => {
  const rows = [[0.15, 0.18, 1, 1], [0.35, 0.18, 2, 1], [0.75, 0.18, 3, 1]] as const;
  const values = folded(grid(rows), { steps: 100 });
  assertEquals(values.slice(6, 44).some(Number.isNaN), false);
  assertEquals(values.slice(45, 65).every(Number.isNaN), true);
});

Deno.test("foldedGrid() weights by inverse variance and leaves masked samples out", () => {
  const rows = [[0.5, 1, 1, 1], [0.5, 1, 4, 2], [0.5, 1, 99, Infinity]] as const;
  for (const value of folded(grid(rows))) {
    assertAlmostEquals(value, (1 + 4 / 4) / (1 + 1 / 4), 1e-12);
  }
});

Deno.test("foldedGrid() shows each cycle the same", () => {
  const two = foldedGrid(grid([[0.2, 0.2, 5, 1]]), { cycles: 2, steps: 10 });
  const values = [...two.values as Float64Array];
  assertEquals(two.rows, 20);
  assertEquals(values.slice(0, 10), values.slice(10));
});
