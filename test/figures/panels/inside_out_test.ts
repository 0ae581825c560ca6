import { assertAlmostEquals, assertEquals } from "@std/assert";
import { binaryFrom } from "../../../engine/binary/mod.ts";
import {
  binaryMarks,
  drawBinaryMarks,
  insideOutMarks,
  insideOutPlace,
  mapPanel,
  mapWindow,
  runsText,
} from "../../../engine/figures/mod.ts";
import { insideOutMap, mapPeak } from "../../../engine/tomography/mod.ts";

Deno.test("insideOutPlace() marks a source where insideOutMap() puts its light", () => {
  // A spot wide enough for the grid; the Jacobian of the turned map moves its peak by σ² / v.
  const [pixels, half_width_kms, step] = [161, 1600, 20];
  const intensity = Float64Array.from({ length: pixels * pixels }, (_, k) => {
    const vx = (k % pixels) * step - half_width_kms;
    const vy = Math.floor(k / pixels) * step - half_width_kms;
    return Math.exp(-0.5 * ((vx + 600) ** 2 + (vy - 500) ** 2) / 40 ** 2);
  });
  const peak = mapPeak(insideOutMap({ pixels, half_width_kms, intensity }));
  const [vx, vy] = insideOutPlace([-600, 500], half_width_kms);
  assertAlmostEquals(peak.vx_kms, vx, 6);
  assertAlmostEquals(peak.vy_kms, vy, 6);
});

Deno.test("insideOutMarks() twice gives the marks back, and draws nothing of what is at rest", () => {
  const marks = binaryMarks(binaryFrom({ k_accretor_kms: 80, k_donor_kms: 320 }));
  const turned = insideOutMarks(marks, 2000);
  insideOutMarks(turned, 2000).stream.forEach(([vx, vy], i) => {
    assertAlmostEquals(vx, marks.stream[i]![0], 1e-9);
    assertAlmostEquals(vy, marks.stream[i]![1], 1e-9);
  });
  const place = mapWindow({ pixels: 101, half_width_kms: 2000 }, {
    x: 0,
    y: 0,
    width: 200,
    height: 200,
  });
  const paths = drawBinaryMarks(turned, place, { named: false })
    .map((item) => item.kind === "path" ? item.d : "");
  assertEquals(paths.some((d) => /NaN|Infinity/.test(d)), false);
});

Deno.test("mapPanel() counts speeds from the rim when it is turned inside out", () => {
  const map = { pixels: 3, half_width_kms: 2000, intensity: new Float64Array(9) };
  const frame = { x: 40, y: 10, width: 200, height: 200 };
  const { items } = mapPanel(map, { frame, scale: { limits: [0, 1] }, inside_out: true });
  const below = items.flatMap((item) =>
    item.kind === "text" && item.y > 200 ? [{ x: item.x, text: runsText(item.runs) }] : []
  );
  const numbers = below.filter(({ text }) => /^\d/.test(text)).sort((a, b) => a.x - b.x);
  assertEquals(numbers.map(({ text }) => text), ["0", "1000", "2000", "1000", "0"]);
  assertEquals(numbers[2]!.x, 140); // the greatest speed in the middle
  assertEquals(below.some(({ text }) => text === "speed along Vx (km s−1)"), true);
});
