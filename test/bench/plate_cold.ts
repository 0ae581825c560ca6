/**
 * Draws the standard plate in all three formats, as a command does after its start, and tells how
 * long it took from the start of the process: by the clock, and in processor time of all threads (a
 * third of it is the compiler's, at work beside the main thread).
 *
 *     deno run --allow-read test/bench/plate_cold.ts
 */
import process from "node:process";
import { exampleContent } from "../figures/example_content.ts";

const content = exampleContent();
const figures = await import("../../engine/figures/mod.ts");
const picture = figures.standardPlate(content);
const svg = figures.svgText(picture);
const png = await figures.pngBytes(picture);
const pdf = await figures.pdfBytes(picture);
const { user, system } = process.cpuUsage();
console.log(
  `SVG ${svg.length}, PNG ${png.length}, PDF ${pdf.length} bytes; ` +
    `${(performance.now() / 1000).toFixed(2)} s by the clock, ` +
    `${((user + system) / 1e6).toFixed(2)} s of processor time`,
);
