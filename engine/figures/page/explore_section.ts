import { stretchNames } from "../colour/stretch.ts";
import { lineLabel } from "../line_label.ts";
import { labelHtml } from "./label_html.ts";
import { escapeMarkup } from "../svg_draw.ts";
import type { ReportContent } from "./report_page.ts";

const mapHelp =
  "Velocity map. Arrow keys move the pointed-at place by one pixel, with Shift by ten; Escape lets go.";
const trailHelp =
  "Trails. Arrow keys move the pointed-at phase and velocity, with Shift ten times as far; Escape lets go.";

/**
 * The part of a report page that can be touched: switches, views, sliders.
 *
 * @param content The report.
 * @returns HTML.
 *
 * @example
 * ```ts
 * import { exploreSection } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const html = exploreSection({
 *   title: "", version: "", subjects: [], binary: null, results: [], checklist: [], made: [], target_text: null,
 * });
 * assert(!html.includes("slider-mass_ratio")); // no binary, no sliders
 * ```
 */
export function exploreSection(content: ReportContent): string {
  const { subjects, binary } = content;
  const radio = (name: string, value: string, label: string, first: boolean) =>
    `<label><input type="radio" name="${name}" value="${value}"${first ? " checked" : ""}> ` +
    `${escapeMarkup(label)}</label>`;
  const lines = subjects.map(({ line }, i) =>
    radio("line", String(i), lineLabel(line.name), i === 0)
  );
  const stretches = stretchNames.map((name, i) => radio("stretch", name, name, i === 0));
  return `<section aria-label="Explore">
<div class="switches">
<fieldset><legend>Line</legend>${lines.join("")}</fieldset>
<fieldset id="methods-box"><legend>Map by</legend><span id="methods"></span></fieldset>
<fieldset><legend>Stretch</legend>${stretches.join("")}</fieldset>
</div>
<p id="shown-name" aria-live="polite"></p>
<noscript><p>The views need JavaScript; the tables below do not.</p></noscript>
<div class="views">
<figure id="map-view" tabindex="0" role="application" aria-label="${mapHelp}">
<div class="stage"><div id="map-drawing"></div><div class="over" id="map-over"></div></div>
</figure>
<figure id="trail-view" tabindex="0" role="application" aria-label="${trailHelp}">
<div class="stage"><div id="trail-drawing"></div><div class="over" id="trail-over"></div></div>
</figure>
<p id="readout" role="status" aria-live="polite"></p>
<figure class="wide">
<div class="stage"><div id="exposure-drawing"></div></div>
</figure>
</div>
<div class="slider exposure-slider">
<label for="exposure-slider">Exposure</label><output id="exposure-name" for="exposure-slider"></output>
<input type="range" id="exposure-slider" min="0" max="0" step="1" value="0">
</div>
${binary ? sliders(content) : ""}
<div class="buttons">
<button type="button" id="save-svg">Save this view as SVG</button>
<button type="button" id="save-png">Save this view as PNG</button>
</div>
</section>`;
}

function sliders(content: ReportContent): string {
  const binary = content.binary!;
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  const gamma = content.subjects[0]?.systemic_kms ?? 0;
  const rows = [
    ["mass_ratio", "Mass ratio *q*", 0.02, 2, 0.005, ""],
    ["k_sum_kms", "*K*_{1} + *K*_{2}", 0.3 * sum, 2 * sum, 1, "km s^{−1}"],
    ["systemic_kms", "Systemic velocity *γ*", gamma - 300, gamma + 300, 0.5, "km s^{−1}"],
    ["phase_zero", "Shift of phase zero", -0.5, 0.5, 0.001, "cycles"],
    ["outer_radius_over_a", "Outer rim", 0.05, 0.7, 0.005, "*a*"],
    ["inner_radius_over_a", "Inner rim", 0.005, 0.3, 0.001, "*a*"],
  ] as const;
  const html = rows.map(([key, label, low, high, step, unit]) => {
    const ends = `min="${round(low)}" max="${round(high)}" step="${step}"`;
    return `<div class="slider"><label for="slider-${key}">${labelHtml(label)}</label>` +
      `<span><output id="value-${key}" for="slider-${key}"></output> ${labelHtml(unit)}</span>` +
      `<input type="range" id="slider-${key}" ${ends}></div>`;
  });
  return `<div class="sliders" role="group" aria-label="Binary">
${html.join("\n")}
</div>
<div class="buttons"><button type="button" id="reset">Back to the values of the report</button></div>`;
}

function round(value: number): number {
  return Number(value.toFixed(3));
}
