import { assertAlmostEquals, assertEquals, assertGreater } from "@std/assert";
import { binaryFrom } from "../../../engine/binary/mod.ts";
import {
  binaryMarks,
  drawFeatures,
  exposureRing,
  type Item,
  mapWindow,
  type MarkedFeature,
} from "../../../engine/figures/mod.ts";

const frame = { x: 0, y: 0, width: 234, height: 234 };
const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, frame);

/** Extent of a path's points. */
function extent(item: Item | undefined) {
  if (item?.kind !== "path") throw new Error("no path");
  const numbers = item.d.match(/-?[\d.]+/g)!.map(Number);
  const x = numbers.filter((_, i) => i % 2 === 0);
  const y = numbers.filter((_, i) => i % 2 === 1);
  return { width: Math.max(...x) - Math.min(...x), height: Math.max(...y) - Math.min(...y) };
}

Deno.test("mapWindow() puts pixel edges, not centres, at the window's edges", () => {
  assertEquals(place.reach_kms, 1010);
  assertAlmostEquals(place.x(-1010), place.window.x, 1e-9);
  assertAlmostEquals(place.y(1010), place.window.y, 1e-9);
});

/** The ellipse of a drawn feature: the part of the path before the pointer. */
function ellipseOf(feature: MarkedFeature): Item {
  const item = drawFeatures([feature], place)[0]!;
  return item.kind === "path" ? { ...item, d: item.d.slice(0, item.d.indexOf("Z")) } : item;
}

Deno.test("drawFeatures() draws ellipses of one standard deviation, turned as the errors are", () => {
  const scale = place.x(1) - place.x(0);
  const base = { vx_kms: 0, vy_kms: 0, vx_error_kms: 60, vy_error_kms: 30 };
  const upright = extent(ellipseOf(base));
  assertAlmostEquals(upright.width / 2 / scale, 60, 0.5);
  assertAlmostEquals(upright.height / 2 / scale, 30, 0.5);
  // Wholly correlated errors fall on a line from lower left to upper right.
  const item = ellipseOf({ ...base, correlation: 1 });
  const numbers = item.kind === "path" ? item.d.match(/-?[\d.]+/g)!.map(Number) : [];
  assertGreater(numbers[0]!, place.x(0));
  assertGreater(place.y(0), numbers[1]!);
});

Deno.test("drawFeatures() leaves a feature with small errors uncovered, the pointer outside it", () => {
  const [under] = drawFeatures(
    [{ vx_kms: -300, vy_kms: 400, vx_error_kms: 1, vy_error_kms: 1 }],
    place,
  );
  const numbers = (under as { d: string }).d.match(/-?[\d.]+/g)!.map(Number);
  assertEquals(numbers.length, 4);
  for (const k of [0, 2]) {
    const away = Math.hypot(numbers[k]! - place.x(-300), numbers[k + 1]! - place.y(400));
    assertGreater(away, 5);
  }
  assertGreater(place.x(-300), numbers[2]!); // up and to the left, away from the middle
  assertGreater(place.y(400), numbers[3]!);
});

Deno.test("binaryMarks() puts the marks of the stream at tenths of the separation", () => {
  const marks = binaryMarks(binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 }));
  assertEquals(marks.ticks.map((tick) => tick.radius_over_a), [0.6, 0.5, 0.4, 0.3, 0.2, 0.1]);
  assertEquals(marks.stream.length, marks.kepler_at_stream.length);
});

Deno.test("exposureRing() stands where the gas recedes fastest at each phase", () => {
  for (const phase of [0, 0.1, 0.3, 0.62, 0.9]) {
    const sampling = {
      count: 1,
      phase: Float64Array.of(phase),
      phase_width: Float64Array.of(0.01),
    };
    const [ticks] = exposureRing(sampling, { window: place.window });
    const [x, y] = (ticks as { d: string }).d.match(/-?[\d.]+/g)!.map(Number) as [number, number];
    const vx = x - place.x(0);
    const vy = place.y(0) - y;
    const r = Math.hypot(vx, vy);
    // V(φ) = −Vx cos 2πφ + Vy sin 2πφ is largest, and equal to r, along this direction.
    const seen = -vx * Math.cos(2 * Math.PI * phase) + vy * Math.sin(2 * Math.PI * phase);
    assertAlmostEquals(seen / r, 1, 1e-6);
  }
});
