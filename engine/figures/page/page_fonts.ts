import { fontRules } from "../font_rules.ts";

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
  return fontRules({ regular: characters, italic: characters });
}
