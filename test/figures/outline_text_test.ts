import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import {
  outlinedSvg,
  outlineText,
  type PathItem,
  type Picture,
  type TextItem,
} from "../../engine/figures/mod.ts";

function picture(...items: TextItem[]): Picture {
  return { width: 800, height: 40, items, title: "", description: "" };
}

function letter(text: string, x: number, more: Partial<TextItem["runs"][0]> = {}): TextItem {
  return { kind: "text", x, y: 25, size_pt: 10, runs: [{ text, ...more }] };
}

function paths(of: Picture): PathItem[] {
  return of.items.filter((item) => item.kind === "path");
}

/** Path data without a line back to the start before it is closed, which says nothing. */
function withoutReturns(d: string): string {
  return d.split("Z").map((contour) => {
    const start = numbers(contour).slice(0, 2);
    const [, kept, last] = contour.match(/^(.*)L([^MLQC]*)$/) ?? [];
    const back = last !== undefined &&
      numbers(last).every((value, i) => Math.abs(value - start[i]!) < 0.002);
    return back ? kept! : contour;
  }).join("Z");
}

function numbers(d: string): number[] {
  return (d.match(/-?\d+(\.\d+)?/g) ?? []).map(Number);
}

Deno.test("outlineText() gives the outlines that resvg 2.6.2 reads from the same fonts", async () => {
  // Simple glyphs, glyphs made of others (Å é), both faces, and the fallback.
  const upright = "AZagkms0123456789−±×°()/,.Åéγσχβφ";
  const items = [
    ...[...upright].map((text, i) => letter(text, 10 + 12 * i)),
    ...[..."VKqiγ"].map((text, i) => letter(text, 500 + 12 * i, { italic: true })),
    ...[..."☉≈"].map((text, i) => letter(text, 600 + 12 * i)),
  ];
  const svg = await outlinedSvg(picture(...items));
  const expected = [...svg.matchAll(/<path [^>]*d="([^"]+)"/g)].map((match) =>
    withoutReturns(match[1]!)
  );
  const found = paths(outlineText(picture(...items)))
    .map(({ d }) => withoutReturns(d));
  assertEquals(found.length, items.length);
  assertEquals(expected.length, items.length);
  found.forEach((d, i) => {
    // The same commands in the same order; places to the last digit that is written.
    const commands = (text: string) => text.replace(/[^MLQCZ]/g, "");
    const name = items[i]!.runs[0]!.text;
    assertEquals(commands(d), commands(expected[i]!), name);
    const [ours, theirs] = [numbers(d), numbers(expected[i]!)];
    ours.forEach((value, k) => assertAlmostEquals(value, theirs[k]!, 0.002, name));
  });
});

Deno.test("outlineText() anchors, raises and turns letters as they are set", () => {
  const box = (item: TextItem) => {
    const [path] = paths(outlineText(picture(item)));
    const all = numbers(path!.d);
    const xs = all.filter((_, i) => i % 2 === 0), ys = all.filter((_, i) => i % 2 === 1);
    return { x: [Math.min(...xs), Math.max(...xs)], y: [Math.min(...ys), Math.max(...ys)] };
  };
  const at = { ...letter("H", 100) };
  const [start, middle, end] = (["start", "middle", "end"] as const)
    .map((anchor) => box({ ...at, anchor }));
  assert(start!.x[0]! > 100 && end!.x[1]! < 100);
  assertAlmostEquals((middle!.x[0]! + middle!.x[1]!) / 2, 100, 0.2);
  const raised = box({ ...at, runs: [{ text: "H", script: "super" }] });
  assertAlmostEquals(raised.y[1]!, 25 - 3.8, 0.01); // 0.38 of 10 pt above the line
  const turned = box({ ...at, rotate_deg: -90 });
  assert(turned.y[1]! < 25 && turned.x[1]! <= 100.01, JSON.stringify(turned)); // upwards, left of it
});

Deno.test("outlineText() lays the halo under the letters, and leaves blanks out", () => {
  const items = paths(outlineText(picture({ ...letter("b c", 10), halo: "#ffffff" })));
  assertEquals(items.map(({ stroke, fill }) => [stroke, fill]), [["#ffffff", undefined], [
    undefined,
    "#000000",
  ]]);
  assertEquals(items[0]!.d, items[1]!.d);
  assertEquals(paths(outlineText(picture(letter(" ", 10)))), []);
});
