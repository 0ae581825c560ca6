import { assertAlmostEquals, assertEquals } from "@std/assert";
import { boxPath, ellipsePath, pathCoverage } from "../../engine/figures/mod.ts";

function sum(values: Iterable<number>): number {
  return [...values].reduce((total, value) => total + value, 0);
}

Deno.test("pathCoverage() gives each pixel the area of a box that cuts it", () => {
  const d = boxPath({ x: 0.25, y: 0.5, width: 2, height: 1 });
  const { parts } = pathCoverage(d, { columns: 3, rows: 2, scale: 1 });
  // By hand: widths 0.75, 1, 0.25 in two rows of half a pixel.
  assertEquals([...parts], [0.375, 0.5, 0.125, 0.375, 0.5, 0.125]);
});

Deno.test("pathCoverage() cuts pixels along a slanted edge by area", () => {
  const { parts } = pathCoverage("M0,0L2,2L0,2Z", { columns: 2, rows: 2, scale: 1 });
  assertEquals([...parts], [0.5, 0, 1, 0.5]); // a triangle's halves
});

Deno.test("pathCoverage() sums to the area of a circle, whichever way round it is drawn", () => {
  const circle = ellipsePath([10, 12], { rx: 7.3 });
  const { parts } = pathCoverage(circle, { columns: 60, rows: 60, scale: 2.5 });
  // ellipsePath() is true to 0.03 % in radius, so to 0.06 % in area.
  assertAlmostEquals(sum(parts) / (Math.PI * (7.3 * 2.5) ** 2), 1, 6e-4);
  const backwards = "M0,0L0,3L3,3L3,0Z";
  assertEquals(sum(pathCoverage(backwards, { columns: 4, rows: 4, scale: 1 }).parts), 9);
});

Deno.test("pathCoverage() agrees with counting points when the outline leaves the box", () => {
  const options = { left: 3, top: 4, columns: 9, rows: 7, scale: 1.5, shift: [1, -2] } as const;
  const { parts } = pathCoverage(ellipsePath([4, 7], { rx: 4, ry: 2.5, rotate_deg: 30 }), options);
  const [cos, sin] = [Math.cos(Math.PI / 6), Math.sin(Math.PI / 6)];
  const fine = 40; // points along a side: within 1/40 along the edge
  for (let row = 0; row < 7; row++) {
    for (let column = 0; column < 9; column++) {
      let count = 0;
      for (let k = 0; k < fine * fine; k++) {
        const px = (3 + column + (k % fine + 0.5) / fine) / 1.5 - 1 - 4;
        const py = (4 + row + (Math.floor(k / fine) + 0.5) / fine) / 1.5 + 2 - 7;
        const [u, v] = [(px * cos + py * sin) / 4, (py * cos - px * sin) / 2.5];
        if (u * u + v * v < 1) count++;
      }
      assertAlmostEquals(parts[row * 9 + column]!, count / fine ** 2, 0.01);
    }
  }
});
