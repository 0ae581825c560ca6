import { Buffer } from "node:buffer";
import type { FaceName } from "./font_names.ts";
import { faceNames, fontFace } from "./fonts.ts";
import { webFont } from "./web_font.ts";

/**
 * The style rules that bring faces along with a document, each with the characters that are used.
 *
 * @param characters Characters by face; a face without any is left out.
 * @returns CSS with the fonts inside.
 *
 * @example
 * ```ts
 * import { fontRules } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(fontRules({ regular: "km s", italic: "V" }).match(/@font-face/g)?.length, 2);
 * ```
 */
export function fontRules(characters: { readonly [name in FaceName]?: string }): string {
  return faceNames.flatMap((name) => {
    const used = characters[name] ?? "";
    if (used === "") return [];
    const { family, bytes } = fontFace(name);
    const woff = Buffer.from(webFont(bytes, { characters: used })).toString("base64");
    const style = name === "italic" ? "italic" : "normal";
    return [
      `@font-face{font-family:'${family}';font-style:${style};font-weight:400;` +
      `src:url(data:font/woff;base64,${woff}) format('woff')}`,
    ];
  }).join("\n");
}
