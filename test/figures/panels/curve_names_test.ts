import { assert, assertEquals } from "@std/assert";
import { type Box, curveNames, labelRuns, textWidth } from "../../../engine/figures/mod.ts";

const frame: Box = { x: 10, y: 20, width: 120, height: 120 };
const options = { frame, x_range: [0, 1], y_range: [0, 1] } as const;
const fan = [0.3, 0.5, 0.7, 0.9, 1.2, 2, 4].map((slope) => ({
  name: `slope ${slope}`,
  x: [0, 10],
  y: [0, 10 * slope],
}));

/** The area that a note covers on the page, pt. */
function boxOf(note: { x: number; y: number; text: string }): Box {
  const width = textWidth(labelRuns(note.text), 7);
  const x = frame.x + note.x * frame.width - width / 2;
  return { x, y: frame.y + (1 - note.y) * frame.height - 6, width, height: 7 };
}

Deno.test("curveNames() keeps names within the frame and off one another when curves leave it", () => {
  const boxes = curveNames(fan, options).map(boxOf);
  assert(boxes.length >= 5, `${boxes.length} of 7 curves are named`);
  for (const [i, box] of boxes.entries()) {
    assert(box.x >= frame.x && box.x + box.width <= frame.x + frame.width);
    assert(box.y >= frame.y && box.y + box.height <= frame.y + frame.height);
    for (const other of boxes.slice(i + 1)) {
      const apart = box.x + box.width < other.x || other.x + other.width < box.x ||
        box.y + box.height < other.y || other.y + other.height < box.y;
      assert(apart, JSON.stringify([box, other]));
    }
  }
});

Deno.test("curveNames() puts a name on its own curve", () => {
  for (const note of curveNames(fan, options)) {
    const slope = Number(note.text.slice(6));
    // 0.34 of a letter's height lies between the baseline and the middle of the name.
    const middle = note.y + 0.34 * 7 / frame.height;
    assert(Math.abs(middle - slope * note.x) < 0.02, note.text);
  }
});

Deno.test("curveNames() leaves a curve without a name when it never enters the frame", () => {
  assertEquals(curveNames([{ name: "away", x: [2, 3], y: [2, 3] }], options), []);
  assertEquals(curveNames([{ name: "nothing", x: [NaN, NaN], y: [0, 1] }], options), []);
});

Deno.test("curveNames() keeps names out of the areas that are to be free", () => {
  const curve = { name: "flat", x: [0, 1], y: [0.5, 0.5] };
  const free = [{ x: 80, y: 60, width: 60, height: 40 }];
  const [note] = curveNames([curve], { ...options, free });
  assert(boxOf(note!).x + boxOf(note!).width < 80);
});
