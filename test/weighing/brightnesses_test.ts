import { nonNegativeLeastSquares, randomStream } from "@millrace/millrace/numerics";
import { assertAlmostEquals, assertEquals, assertGreaterOrEqual, assertLess } from "@std/assert";
import { Matrix } from "ml-matrix";
import { productsOf, solveBrightnesses } from "../../engine/weighing/brightnesses.ts";

function problem(seed: number) {
  const random = randomStream(seed);
  const columns = Array.from(
    { length: 5 },
    () => Float64Array.from({ length: 40 }, () => random.normal()),
  );
  const data = Float64Array.from({ length: 40 }, () => random.normal());
  return { columns, data };
}

// Karush–Kuhn–Tucker: the slope is zero along what is free, and downhill only into the negative.
Deno.test("solveBrightnesses() meets the conditions of the minimum when signs are mixed", () => {
  let dark = 0;
  for (let seed = 1; seed <= 100; seed++) {
    const { columns, data } = problem(seed);
    const found = solveBrightnesses(productsOf(columns, data), 2);
    const residual = data.map((value, n) =>
      value - columns.reduce((sum, column, j) => sum + found[j]! * column[n]!, 0)
    );
    columns.forEach((column, j) => {
      const slope = column.reduce((sum, value, n) => sum + value * residual[n]!, 0);
      if (j >= 2) assertGreaterOrEqual(found[j]!, 0);
      if (j >= 2 && found[j] === 0) {
        assertLess(slope, 1e-9);
        dark++;
      } else assertAlmostEquals(slope, 0, 1e-9);
    });
  }
  assertGreaterOrEqual(dark, 100); // of 300 a half: the bound mattered
});

Deno.test("solveBrightnesses() agrees with active sets when no sign is free", () => {
  for (let seed = 1; seed <= 30; seed++) {
    const { columns, data } = problem(seed);
    const design = new Matrix(Array.from(data, (_, n) => columns.map((column) => column[n]!)));
    const expected = nonNegativeLeastSquares(design, data);
    const found = solveBrightnesses(productsOf(columns, data), 0);
    expected.forEach((value, j) => assertAlmostEquals(found[j]!, value, 1e-9));
  }
});

Deno.test("solveBrightnesses() gives a copy of a column nothing when it comes second", () => {
  const { columns, data } = problem(7);
  const positive = data.map((value, n) => value + 10 * columns[2]![n]!);
  const once = solveBrightnesses(productsOf(columns.slice(0, 3), positive), 2);
  const twice = solveBrightnesses(
    productsOf([...columns.slice(0, 3), columns[2]!.slice()], positive),
    2,
  );
  assertEquals(twice[3], 0);
  once.forEach((value, j) => assertAlmostEquals(twice[j]!, value, 1e-9));
});
