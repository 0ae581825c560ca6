import { labelRuns } from "../runs.ts";
import { escapeMarkup } from "../svg_draw.ts";

/**
 * A label (markup of `labelRuns`) as HTML.
 *
 * @param label The label.
 * @returns HTML with `i`, `sup` and `sub`.
 *
 * @example
 * ```ts
 * import { labelHtml } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(labelHtml("*K*_{1} < 5"), "<i>K</i><sub>1</sub> &lt; 5");
 * ```
 */
export function labelHtml(label: string): string {
  return labelRuns(label).map(({ text, italic, script }) => {
    const words = escapeMarkup(text);
    if (italic) return `<i>${words}</i>`;
    if (script) return script === "super" ? `<sup>${words}</sup>` : `<sub>${words}</sub>`;
    return words;
  }).join("");
}
