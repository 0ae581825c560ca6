import { escapeMarkup } from "../svg_draw.ts";
import { labelHtml } from "./label_html.ts";
import { measuredText } from "../measured_text.ts";
import type { ChecklistRow } from "./referee_checklist.ts";
import type { ReportContent, ResultRow } from "./report_page.ts";

/**
 * The table of results of a report page.
 *
 * @param results The rows.
 * @returns HTML; empty when there is no row.
 *
 * @example
 * ```ts
 * import { resultsSection } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const row = { quantity: "*K*_{1}", value: 70.12, error: 2.3, unit: "km s^{−1}", note: "wings" };
 * assert(resultsSection([row]).includes("70.1 ± 2.3 km s<sup>−1</sup>"));
 * ```
 */
export function resultsSection(results: readonly ResultRow[]): string {
  if (results.length === 0) return "";
  const rows = results.map(({ quantity, value, error, unit, note }) => {
    const text = value === null ? "none" : `${measuredText(value, error)} ${labelHtml(unit)}`;
    return `<tr><th scope="row">${labelHtml(quantity)}</th><td class="number">${text.trim()}</td>` +
      `<td>${escapeMarkup(note)}</td></tr>`;
  });
  return `<section aria-labelledby="results">
<h2 id="results">Results</h2>
<p>Errors are one standard deviation.</p>
<div class="scroll"><table>
<thead><tr><th scope="col">Quantity</th><th scope="col">Value</th><th scope="col">From</th></tr></thead>
<tbody>
${rows.join("\n")}
</tbody>
</table></div>
</section>`;
}

/**
 * The referee's checklist of a report page.
 *
 * @param checklist The points.
 * @returns HTML; empty when there is none.
 *
 * @example
 * ```ts
 * import { checklistSection, refereeChecklist } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * assert(checklistSection(refereeChecklist({})).includes("Whose zero of phase is it?"));
 * ```
 */
export function checklistSection(checklist: readonly ChecklistRow[]): string {
  if (checklist.length === 0) return "";
  const rows = checklist.map(({ question, answer, state }) =>
    `<tr><th scope="row">${escapeMarkup(question)}</th><td>${escapeMarkup(answer)}</td>` +
    `<td class="state ${state}">${state}</td></tr>`
  );
  return `<section aria-labelledby="checklist">
<h2 id="checklist">A referee's checklist</h2>
<div class="scroll"><table>
<thead><tr><th scope="col">Question</th><th scope="col">Answer</th><th scope="col">State</th></tr></thead>
<tbody>
${rows.join("\n")}
</tbody>
</table></div>
</section>`;
}

/**
 * How a report was made, with the target file to copy.
 *
 * @param content The report.
 * @returns HTML.
 *
 * @example
 * ```ts
 * import { madeSection } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * assert(madeSection({ made: [{ name: "seed", value: "1" }], target_text: null }).includes("seed"));
 * ```
 */
export function madeSection(content: Pick<ReportContent, "made" | "target_text">): string {
  const { made, target_text } = content;
  const rows = made.map(({ name, value }) =>
    `<tr><th scope="row">${escapeMarkup(name)}</th><td>${escapeMarkup(value)}</td></tr>`
  );
  const target = target_text === null ? "" : `
<p>The target file that made it:</p>
<pre id="target-text">${escapeMarkup(target_text)}</pre>
<div class="buttons"><button type="button" id="copy-target">Copy the target file</button></div>`;
  if (rows.length === 0 && target === "") return "";
  return `<section aria-labelledby="made">
<h2 id="made">How it was made</h2>
<div class="scroll"><table><tbody>
${rows.join("\n")}
</tbody></table></div>${target}
</section>`;
}
