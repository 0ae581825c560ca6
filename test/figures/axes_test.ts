import { assert, assertEquals } from "@std/assert";
import { drawAxes, runsText } from "../../engine/figures/mod.ts";

function values(frame: { width: number; height: number }, ticks: number) {
  const x = { range: [2400, 3650], ticks } as const;
  const items = drawAxes({ x: 40, y: 10, ...frame }, { x, y: { range: [30, 100], ticks } });
  const texts = items.flatMap((item) => item.kind === "text" ? [item] : []);
  return {
    below: texts.filter((item) => item.anchor === "middle"),
    beside: texts.filter((item) => item.anchor === "end"),
  };
}

Deno.test("drawAxes() writes fewer values when the axis is too short for those asked for", () => {
  const wide = values({ width: 300, height: 120 }, 7);
  const narrow = values({ width: 60, height: 18 }, 7);
  assertEquals(wide.below.length, 7);
  for (const [a, b] of narrow.below.slice(1).map((next, i) => [narrow.below[i]!, next] as const)) {
    const letters = (runsText(a.runs).length + runsText(b.runs).length) / 2;
    assert(b.x - a.x > 3.5 * letters, `${runsText(a.runs)} and ${runsText(b.runs)} touch`);
  }
  assert(narrow.beside.length <= 2 && wide.beside.length > 4);
});

Deno.test("drawAxes() writes every value that was asked for one by one", () => {
  const x = { range: [0, 1], ticks: [0, 0.1, 0.2, 0.3] } as const;
  const items = drawAxes({ x: 0, y: 0, width: 20, height: 20 }, {
    x,
    y: { range: [0, 1], ticks: [] },
  });
  assertEquals(items.filter((item) => item.kind === "text").length, 4);
});
