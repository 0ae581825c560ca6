import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertLess,
  assertStringIncludes,
} from "@std/assert";
import { Buffer } from "node:buffer";
import { reportPage } from "../../../engine/figures/mod.ts";
import { writtenByMillrace } from "../../../engine/files/mod.ts";
import { bundlePage, pageModule } from "../build_page.ts";
import { exampleReport } from "../example_report.ts";

const bundle = await bundlePage();

Deno.test({
  name: "pageScript is what its sources bundle to, byte for byte",
  ignore: bundle === null,
  async fn() {
    const kept = await Deno.readTextFile(pageModule);
    // Compared by equality alone: a difference of 250 000 characters is not to be printed.
    assert(kept === bundle, "run test/figures/build_page.ts and commit page_script.ts");
  },
});

Deno.test("reportPage() is one file under 3 MB that asks nothing of the network", () => {
  const html = reportPage(exampleReport());
  assertLess(html.length, 3e6);
  const addresses = html.match(/(?:src|href|url)\s*[=(]\s*["']?(?!data:)[a-z]+:\/\//g);
  assertEquals(addresses, null);
});

Deno.test("reportPage() gives the same bytes when written twice, and is known as ours", () => {
  const html = reportPage(exampleReport());
  assert(html === reportPage(exampleReport()));
  assert(writtenByMillrace(new TextEncoder().encode(html)));
});

Deno.test("reportPage() keeps hostile text out of the markup and the script", () => {
  const evil = `</script><script>alert("x")</script>`;
  const report = exampleReport();
  const html = reportPage({
    ...report,
    title: evil,
    target_text: evil,
    results: [{ quantity: evil, value: 1, error: 1, unit: evil, note: evil }],
    made: [{ name: evil, value: evil }],
    subjects: report.subjects.map((subject) => ({
      ...subject,
      line: { ...subject.line, name: evil },
      sources: [evil],
    })),
  });
  assert(!html.includes("<script>alert"));
  // The data block and the page's own script, and no other.
  assertEquals(html.match(/<script\b/g)!.length, 2);
});

Deno.test("reportPage() states every result with its error, and says none where there is none", () => {
  const html = reportPage(exampleReport());
  assertStringIncludes(html, "70.1 ± 2.3 km s<sup>−1</sup>");
  assertStringIncludes(html, '<td class="number">none</td><td>no inclination</td>');
});

Deno.test("reportPage() embeds fonts whose tables have their stated lengths", async () => {
  const [, data] = reportPage(exampleReport()).match(/font\/woff;base64,([^)]+)\)/)!;
  const woff = Buffer.from(data!, "base64");
  assertEquals(woff.subarray(0, 4).toString(), "wOFF");
  assertEquals(woff.readUInt32BE(8), woff.length);
  let end = 0;
  for (let i = 0; i < woff.readUInt16BE(12); i++) {
    const at = 44 + 20 * i;
    const [offset, packed, length] = [4, 8, 12].map((k) => woff.readUInt32BE(at + k)) as [
      number,
      number,
      number,
    ];
    const body = new Blob([woff.subarray(offset, offset + packed)]).stream();
    const stream = packed < length ? body.pipeThrough(new DecompressionStream("deflate")) : body;
    assertEquals((await new Response(stream).arrayBuffer()).byteLength, length);
    end = offset + packed;
  }
  assertAlmostEquals(end, woff.length, 3);
});
