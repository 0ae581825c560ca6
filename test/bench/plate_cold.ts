/** Draws the standard plate in all three formats, as a command does after its start. */
import { exampleContent } from "../figures/example_content.ts";

const content = exampleContent();
const figures = await import("../../engine/figures/mod.ts");
const picture = figures.standardPlate(content);
const svg = figures.svgText(picture);
const png = await figures.pngBytes(picture);
const pdf = await figures.pdfBytes(picture);
console.log(svg.length, png.length, pdf.length);
