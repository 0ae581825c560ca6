import { Buffer } from "node:buffer";
import { TEXT_FAMILY } from "../font_names.ts";
import { fontFace } from "../fonts.ts";
import { webFont } from "./web_font.ts";

/** Latin, Greek and the signs of the trade: what pages are written in. */
function pageCharacters(): string {
  const ranges = [[0x20, 0x7e], [0xa0, 0x17f], [0x391, 0x3c9], [0x2010, 0x2027], [0x2070, 0x209c]];
  const codes = ranges.flatMap(([from, to]) =>
    Array.from({ length: to! - from! + 1 }, (_, i) => from! + i)
  );
  return String.fromCodePoint(...codes) + "−×÷±≤≥≈∝→√∞′″☉⊙½¼¾⟂✓";
}

/**
 * The style rules that bring the text family along with a page, upright and italic.
 *
 * @returns CSS with both fonts inside.
 *
 * @example
 * ```ts
 * import { pageFonts } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(pageFonts().match(/@font-face/g)?.length, 2);
 * ```
 */
export function pageFonts(): string {
  const characters = pageCharacters();
  const rule = (face: "regular" | "italic", style: string) => {
    const woff = Buffer.from(webFont(fontFace(face).bytes, { characters })).toString("base64");
    return `@font-face{font-family:'${TEXT_FAMILY}';font-style:${style};font-weight:400;` +
      `src:url(data:font/woff;base64,${woff}) format('woff')}`;
  };
  return `${rule("regular", "normal")}\n${rule("italic", "italic")}`;
}
