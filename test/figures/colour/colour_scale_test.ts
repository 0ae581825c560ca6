import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import {
  colourBar,
  paintGrid,
  robustLimits,
  runsText,
  stretched,
  stretchNames,
  tidyExponent,
} from "../../../engine/figures/mod.ts";

const box = { x: 0, y: 0, width: 1, height: 1 };

Deno.test("paintGrid() puts row 0 at the bottom and leaves cells without a value as paper", () => {
  // Typed as the page shows it, from the top: . is light, # dark, blank nothing.
  const page = [
    "#. ",
    "..#",
  ];
  const values = [0, 0, 1, 1, 0, NaN];
  const { rgb } = paintGrid({ rows: 2, columns: 3, values }, { box, scale: { limits: [0, 1] } });
  const seen = page.map((line, row) =>
    [...line].map((_, column) => {
      const red = rgb[3 * (3 * row + column)]!;
      return red === 255 ? " " : red > 200 ? "." : "#";
    }).join("")
  );
  assertEquals(seen, page);
});

Deno.test("paintGrid() clips values beyond the limits, infinities too", () => {
  const values = [-Infinity, -5, 5, Infinity];
  const { rgb } = paintGrid({ rows: 1, columns: 4, values }, {
    box,
    scale: { limits: [-1, 1], map: "grey" },
  });
  assertEquals(rgb[0], rgb[3]);
  assertEquals(rgb[6], rgb[9]);
  assert(rgb[0]! > rgb[6]!);
});

for (const stretch of stretchNames) {
  Deno.test(`stretched() rises from 0 to 1 between the limits when the stretch is ${stretch}`, () => {
    for (const limits of [[0, 10], [-2, 10], [-5, 5], [1e-9, 3e-7]] as const) {
      const at = (part: number) =>
        stretched(limits[0] + part * (limits[1] - limits[0]), { limits, stretch });
      assertAlmostEquals(at(0), 0, 1e-12);
      assertAlmostEquals(at(1), 1, 1e-12);
      for (let i = 0; i < 20; i++) assert(at((i + 1) / 20) > at(i / 20));
    }
    const limits = [-3, 3] as const;
    assertAlmostEquals(
      stretched(1, { limits, stretch }) + stretched(-1, { limits, stretch }),
      1,
      1e-12,
    );
    assert(Number.isNaN(stretched(NaN, { limits, stretch })));
  });
}

Deno.test("robustLimits() are never equal, whatever the values", () => {
  assertEquals(robustLimits([]), [0, 1]);
  assertEquals(robustLimits([NaN, Infinity]), [0, 1]);
  assertEquals(robustLimits([0, 0, 0]), [0, 1]);
  assertEquals(robustLimits([4, 4]), [4, 8]);
  assertEquals(robustLimits([-4, 4, 1], { symmetric: true }), [-4, 4]);
});

Deno.test("robustLimits() scale with the values", () => {
  const values = Array.from({ length: 500 }, (_, i) => (i * 37) % 91);
  const [low, high] = robustLimits(values);
  const [small, large] = robustLimits(values.map((value) => value * 1e-9));
  assertAlmostEquals(small / 1e-9, low, 1e-6);
  assertAlmostEquals(large / 1e-9, high, 1e-6);
});

Deno.test("colourBar() divides its values by the power that its unit states", () => {
  const limits = [0, 3.2e-6] as const;
  assertEquals(tidyExponent(limits), -6);
  const items = colourBar({ limits }, { box: { ...box, width: 100 }, divide_by: 1e-6, unit: "u" });
  const texts = items.flatMap((item) => item.kind === "text" ? [runsText(item.runs)] : []);
  assertEquals(texts, ["0", "3.2 u"]);
});

Deno.test("colourBar() keeps the power of ten when there is no room for the unit", () => {
  const options = { unit: "× 10^{−3} (km s^{−1})^{−1}", divide_by: 1e-3 };
  const end = (width: number) => {
    const box = { x: 0, y: 20, width, height: 4 };
    const items = colourBar({ limits: [0, 0.0062] }, { ...options, box });
    const texts = items.flatMap((item) => item.kind === "text" ? [runsText(item.runs)] : []);
    return texts.at(-1);
  };
  assertEquals(end(200), "6.2 × 10−3 (km s−1)−1");
  assertEquals(end(50), "6.2 × 10−3");
});
