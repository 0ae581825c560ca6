import {
  assert,
  assertEquals,
  assertGreaterOrEqual,
  assertStringIncludes,
  assertThrows,
} from "@std/assert";
import { InputError } from "../../../engine/errors.ts";
import {
  type ColourMapName,
  type Item,
  pdfBytes,
  type Picture,
  pngBytes,
  runsText,
  runStyle,
  SMALLEST_TEXT_PT,
  standardPlate,
  svgText,
  type TextItem,
} from "../../../engine/figures/mod.ts";
import { writtenByMillrace } from "../../../engine/files/mod.ts";
import { exampleContent } from "../example_content.ts";

const widths = ["one-column", "two-column"] as const;

function texts(items: readonly Item[]): TextItem[] {
  return items.flatMap((item) => {
    return item.kind === "text" ? [item] : item.kind === "group" ? texts(item.items) : [];
  });
}

function words(picture: Picture): string[] {
  return texts(picture.items).map((text) => runsText(text.runs));
}

for (const width of widths) {
  Deno.test(`standardPlate() sets no letter under 6 pt when it has ${width}`, () => {
    const picture = standardPlate(exampleContent(), { width });
    for (const text of texts(picture.items)) {
      for (const run of text.runs) {
        assertGreaterOrEqual(runStyle(run, text.size_pt).size_pt, SMALLEST_TEXT_PT);
      }
    }
  });

  Deno.test(`standardPlate() is as wide as the journal's column when it has ${width}`, () => {
    const mm = width === "one-column" ? 84 : 174;
    const { width: points } = standardPlate(exampleContent(), { width });
    assertEquals(Math.round(points / 72 * 25.4 * 1000) / 1000, mm);
  });
}

Deno.test("standardPlate() gives the same bytes when drawn twice", async () => {
  const draw = async () => {
    const picture = standardPlate(exampleContent());
    return [svgText(picture), await pngBytes(picture, { dpi: 100 }), await pdfBytes(picture)];
  };
  assertEquals(await draw(), await draw());
});

Deno.test("standardPlate() is known as our own file when written in each format", async () => {
  const picture = standardPlate(exampleContent());
  assert(writtenByMillrace(new TextEncoder().encode(svgText(picture))));
  assert(writtenByMillrace(await pngBytes(picture, { dpi: 50 })));
  assert(writtenByMillrace(await pdfBytes(picture)));
});

Deno.test("standardPlate() writes km s⁻¹ with a raised −1 on every velocity axis", () => {
  const units = texts(standardPlate(exampleContent()).items).filter((text) => {
    return runsText(text.runs).includes("km s");
  });
  assertEquals(units.length, 5); // Vx, Vy, velocity, the map's unit, γ
  for (const { runs } of units) {
    const unit = runs.findIndex((run) => run.text.endsWith("km s"));
    assertEquals(runs[unit + 1], { text: "−1", script: "super" });
  }
});

Deno.test("standardPlate() names the parts of the binary when it is known, and none otherwise", () => {
  const named = words(standardPlate(exampleContent()));
  const bare = words(standardPlate({ ...exampleContent(), binary: null }));
  for (const name of ["donor", "accretor", "stream", "Kepler"]) {
    assert(named.includes(name), name);
    assert(!bare.includes(name), name);
  }
});

Deno.test("standardPlate() draws one ring tick for each exposure", () => {
  const content = exampleContent({ exposures: 37 });
  const svg = svgText(standardPlate(content));
  const ring = [...svg.matchAll(/d="((?:M[\d.,]+L[\d.,]+)+)" stroke="#1c2430" stroke-width="0.6"/g)]
    .map((match) => match[1]!.split("M").length - 1);
  assert(ring.includes(37), `${ring}`);
});

Deno.test("standardPlate() states in its description the numbers that it used", () => {
  const { description } = standardPlate(exampleContent());
  for (
    const part of [
      "4861.33 Å",
      "201 × 201",
      "27 km/s",
      "The 60 ticks",
      "K1 = 70",
      "K2 = 320",
      "−615 ± 32",
    ]
  ) {
    assertStringIncludes(description, part);
  }
});

Deno.test("standardPlate() leaves its input as it was", () => {
  const content = exampleContent();
  const before = structuredClone(content);
  standardPlate(content);
  assertEquals(content, before);
});

Deno.test("standardPlate() keeps hostile characters of a title out of the markup", () => {
  const title = `<script>&"'\u0000 *x* ^{2}`;
  const svg = svgText(standardPlate({ ...exampleContent(), title }));
  assert(!svg.includes("<script"));
  assert(!svg.includes("\u0000"));
  assertStringIncludes(svg, "&lt;script&gt;&amp;&quot;'\ufffd *x* ^{2}</text>");
});

Deno.test("standardPlate() draws a map that is zero everywhere or has no covered phase", async () => {
  const content = exampleContent({ blobs: [], noise: 0 });
  const { grid } = content.trail;
  const blank = { ...grid, flux: grid.flux.map(() => NaN), error: grid.error.map(() => Infinity) };
  const picture = standardPlate({ ...content, trail: { ...content.trail, grid: blank } });
  assert((await pngBytes(picture, { dpi: 40 })).length > 1000);
});

Deno.test("standardPlate() names the known colour maps when one is not known", () => {
  const colour_map = "rainbow" as ColourMapName;
  assertThrows(
    () => standardPlate(exampleContent(), { colour_map }),
    InputError,
    'a colour map must be one of ink, tide, balance, grey, viridis, cividis, magma: current value is "rainbow"',
  );
});
