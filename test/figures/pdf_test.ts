import { assert, assertEquals, assertMatch, assertStringIncludes } from "@std/assert";
import { pdfBytes, standardPlate } from "../../engine/figures/mod.ts";
import { toolExists } from "./decode.ts";
import { exampleContent } from "./example_content.ts";

async function run(tool: string, ...more: string[]): Promise<string> {
  const path = await Deno.makeTempFile({ suffix: ".pdf" });
  try {
    await Deno.writeFile(path, await pdfBytes(standardPlate(exampleContent())));
    const args = more.map((argument) => argument === "FILE" ? path : argument);
    const { stdout, stderr } = await new Deno.Command(tool, { args }).output();
    assertEquals(new TextDecoder().decode(stderr), "");
    return new TextDecoder().decode(stdout);
  } finally {
    await Deno.remove(path);
  }
}

Deno.test("pdfBytes() states title, creator, language, alt text and facts", async () => {
  const bytes = await pdfBytes(standardPlate(exampleContent()), { metadata: { Target: "t.toml" } });
  const text = new TextDecoder("latin1").decode(bytes);
  assertStringIncludes(text, "<xmp:CreatorTool>Millrace</xmp:CreatorTool>");
  assertStringIncludes(text, "(Target: t.toml)");
  assertMatch(text, /\/S \/Figure/);
  assertMatch(text, /\/Lang \(en\)/);
});

Deno.test({
  name: "pdfBytes() embeds every font as a subset, seen by pdffonts",
  ignore: !toolExists("/usr/bin/pdffonts"),
  async fn() {
    const rows = (await run("/usr/bin/pdffonts", "FILE")).trim().split("\n").slice(2);
    assertEquals(rows.length, 2);
    for (const row of rows) assertMatch(row, /^[A-Z]{6}\+STIXTwoText-\w+ .* yes yes yes /);
  },
});

Deno.test({
  name: "pdfBytes() keeps text selectable, seen by pdftotext",
  ignore: !toolExists("/usr/bin/pdftotext"),
  async fn() {
    const text = await run("/usr/bin/pdftotext", "-layout", "FILE", "-");
    for (const word of ["VX-0417", "Hβ", "4861.33 Å", "observed", "residual", "orbital phase"]) {
      assertStringIncludes(text, word);
    }
    assertEquals(text.match(/donor/g)?.length, 1); // the halo underneath does not double it
  },
});

Deno.test({
  name: "pdfBytes() keeps rasters at their own cells and uninterpolated, seen by pdfimages",
  ignore: !toolExists("/usr/bin/pdfimages"),
  async fn() {
    const rows = (await run("/usr/bin/pdfimages", "-list", "FILE")).trim().split("\n").slice(2);
    const images = rows.map((row) => row.trim().split(/\s+/));
    assert(images.every((image) => image[2] === "image" && image[9] === "no"));
    const sizes = images.map((image) => `${image[3]}x${image[4]}`);
    assertEquals(sizes.filter((size) => size === "201x201").length, 1);
    assertEquals(sizes.filter((size) => size === "163x480").length, 3);
  },
});
