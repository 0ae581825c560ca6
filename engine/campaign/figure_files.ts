import type { Picture } from "../figures/mod.ts";
import { captionText } from "./caption_text.ts";
import type { PlateSettings } from "./schema/plate_section.ts";

/**
 * A drawn figure as the files that `[plate]` asks for, and its caption as a text file.
 *
 * @param drawn The figure.
 * @param options How to write it.
 * @param options.name Name of the files, without extension.
 * @param options.plate `[plate]`.
 * @returns Names and contents.
 */
export async function figureFiles(
  drawn: { readonly picture: Picture; readonly caption: string },
  options: { name: string; plate: PlateSettings },
): Promise<[name: string, data: Uint8Array | string][]> {
  // Fonts and renderers are heavy: each loads only where it is asked for.
  const { pdfBytes, pngBytes, svgText } = await import("../figures/mod.ts");
  const { name, plate } = options;
  const { picture, caption } = drawn;
  const files: [string, Uint8Array | string][] = [];
  for (const format of plate.formats) {
    const data = format === "svg"
      ? svgText(picture)
      : format === "png"
      ? await pngBytes(picture, plate.png_dpi === undefined ? {} : { dpi: plate.png_dpi })
      : await pdfBytes(picture);
    files.push([`${name}.${format}`, data]);
  }
  return [...files, [`${name}.txt`, captionText(caption)]];
}
