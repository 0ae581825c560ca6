import { pdfBytes, pngBytes, standardPlate, svgText } from "../../engine/figures/mod.ts";
import { exampleContent } from "../figures/example_content.ts";

const content = exampleContent();
const picture = standardPlate(content);
await pngBytes(picture); // the renderer starts once in a process

Deno.bench("standard plate: lay out", { group: "plate" }, () => void standardPlate(content));
Deno.bench("standard plate: SVG", { group: "plate" }, () => void svgText(picture));
Deno.bench("standard plate: PNG, 300 dpi", { group: "plate" }, async () => {
  await pngBytes(picture);
});
Deno.bench("standard plate: PDF", { group: "plate" }, async () => {
  await pdfBytes(picture);
});

// The goal is 1.5 s on a quiet machine of two cores, process start, layout and all three formats included.
Deno.bench("standard plate: cold start to SVG, PNG and PDF", { n: 5, warmup: 1 }, async () => {
  const script = new URL("plate_cold.ts", import.meta.url).pathname;
  const args = ["run", "--no-prompt", "--no-check", "--allow-read", script];
  const { success } = await new Deno.Command(Deno.execPath(), { args }).output();
  if (!success) throw new Error("the plate was not drawn");
});
