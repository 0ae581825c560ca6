import { assert, assertEquals, assertStringIncludes } from "@std/assert";
import {
  type Item,
  labelRuns,
  outlinedSvg,
  type Picture,
  svgText,
} from "../../engine/figures/mod.ts";

function picture(...items: Item[]): Picture {
  return { width: 100, height: 50, items, title: "A title", description: "What is seen" };
}

const label = { kind: "text", x: 50, y: 20, size_pt: 10, anchor: "middle" } as const;

Deno.test("svgText() keeps text as text with true superscripts and italics", () => {
  const svg = svgText(picture({ ...label, runs: labelRuns("*V*_{x} (km s^{−1})") }));
  assertStringIncludes(
    svg,
    '<tspan font-style="italic">V</tspan><tspan dy="2" font-size="7">x</tspan>' +
      '<tspan dy="-2"> (km s</tspan><tspan dy="-3.8" font-size="7">−1</tspan><tspan dy="3.8">)</tspan>',
  );
});

Deno.test("svgText() gives each piece a place of its own when a sign needs the fallback face", () => {
  const svg = svgText(picture({ ...label, runs: labelRuns("*M* ≤ 2 M_{☉}") }));
  assertEquals(svg.match(/<tspan x=/g)?.length, 5);
  assertEquals(svg.match(/font-family="'DejaVu Sans', sans-serif"/g)?.length, 2);
  assert(!svg.includes("text-anchor"));
});

Deno.test("svgText() carries title, alt text and metadata", () => {
  const svg = svgText(picture(), { metadata: { Target: "a & b" } });
  assertStringIncludes(svg, '<title id="m-title">A title</title>');
  assertStringIncludes(svg, '<desc id="m-desc">What is seen</desc>');
  assertStringIncludes(svg, "Software: Millrace\nTarget: a &amp; b</metadata>");
});

Deno.test("svgText() gives clip paths ids of their own when figures stand in one page", () => {
  const group = { kind: "group", clip: "M0,0L1,1Z", items: [] } as const;
  const svg = svgText(picture(group, group), { id_prefix: "b" });
  assertStringIncludes(svg, 'clip-path="url(#b-clip1)"');
  assertStringIncludes(svg, 'clip-path="url(#b-clip2)"');
});

Deno.test("outlinedSvg() holds outlines in place of letters, and the alt text", async () => {
  const svg = await outlinedSvg(picture({ ...label, runs: labelRuns("km s^{−1} ☉") }));
  assert(!svg.includes("<text"));
  assertStringIncludes(svg, "What is seen");
  assertStringIncludes(svg, "Millrace");
});
