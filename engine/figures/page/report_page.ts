import type { SpectralLine } from "../../sky/mod.ts";
import type { VelocityMap } from "../../tomography/mod.ts";
import type { DisplayGrid } from "../panels/folded_grid.ts";
import type { MarkedFeature } from "../panels/map_overlay.ts";
import { lineLabel } from "../line_label.ts";
import { SOFTWARE } from "../marks.ts";
import { escapeMarkup } from "../svg_draw.ts";
import { packArray } from "./packed_array.ts";
import { pageFonts } from "./page_fonts.ts";
import { pageScript } from "./page_script.ts";
import { pageStyle } from "./page_style.ts";
import { exploreSection } from "./explore_section.ts";
import { checklistSection, madeSection, resultsSection } from "./told_sections.ts";
import type { ChecklistRow } from "./referee_checklist.ts";
import type { ReportBinary, ReportData, ReportLine } from "./report_data.ts";

/** One line of a report, as the engine has it. */
export interface ReportSubject {
  /** The line. */
  readonly line: SpectralLine;
  /** Systemic velocity with which the maps were made, km/s. */
  readonly systemic_kms: number;
  /** The trail's display grid. */
  readonly grid: DisplayGrid;
  /** Sources of the rows, for the reader. @default {[]} */
  readonly sources?: readonly string[];
  /** Maps by method, the one shown first in front. */
  readonly maps: readonly {
    /** As in "maximum entropy". */
    readonly method: string;
    /** The map. */
    readonly map: VelocityMap;
    /** The map projected again on the grid, R × C. */
    readonly model: Float64Array;
    /** Data less model, σ, R × C. */
    readonly residual: Float64Array;
    /** χ² per degree of freedom; null when not computed. */
    readonly reduced_chi_square: number | null;
    /** Features, the strongest first. @default {[]} */
    readonly features?: readonly MarkedFeature[];
  }[];
}

/** A row of the table of results. */
export interface ResultRow {
  /** What it is (markup of `labelRuns`). */
  readonly quantity: string;
  /** Its value; null when it could not be had. */
  readonly value: number | null;
  /** One standard deviation; null when not known. */
  readonly error: number | null;
  /** Unit (markup of `labelRuns`); empty for none. */
  readonly unit: string;
  /** Where it comes from, or why there is none. */
  readonly note: string;
}

/** All that a report page shows. */
export interface ReportContent {
  /** Name of the object. */
  readonly title: string;
  /** Version of Millrace. */
  readonly version: string;
  /** The lines. */
  readonly subjects: readonly ReportSubject[];
  /** The binary at which the sliders start; null when nothing is known of it. */
  readonly binary: ReportBinary | null;
  /** Results with their errors. */
  readonly results: readonly ResultRow[];
  /** The referee's checklist, from `refereeChecklist`. */
  readonly checklist: readonly ChecklistRow[];
  /** How it was made: names and values in order, such as digests, seed, settings. */
  readonly made: readonly { readonly name: string; readonly value: string }[];
  /** The target file, to be copied; null for none. */
  readonly target_text: string | null;
}

/**
 * Writes the report page: one HTML file that needs no network, in which map, trail and exposures can
 * be explored.
 *
 * @param content What it shows.
 * @returns The HTML document; the same content gives the same bytes.
 *
 * @example
 * ```ts
 * import { reportPage } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const grid = {
 *   rows: 1, columns: 3, first_kms: -300, step_kms: 300,
 *   phase: Float64Array.of(0.25), phase_width: Float64Array.of(0.5),
 *   flux: Float64Array.of(0, 1, 0), error: Float64Array.of(1, 1, 1),
 * };
 * const map = { pixels: 3, half_width_kms: 300, intensity: new Float64Array(9) };
 * const html = reportPage({
 *   title: "VX-0417",
 *   version: "0.1.0",
 *   subjects: [{
 *     line: { name: "H beta", vacuum_angstrom: 4862.69, air_angstrom: 4861.33, source: "" },
 *     systemic_kms: 27,
 *     grid,
 *     maps: [{
 *       method: "back-projection", map, model: grid.flux, residual: grid.flux,
 *       reduced_chi_square: null,
 *     }],
 *   }],
 *   binary: null, results: [], checklist: [], made: [], target_text: null,
 * });
 * assert(html.startsWith("<!doctype html>"));
 * ```
 */
export function reportPage(content: ReportContent): string {
  const { title, version } = content;
  const data: ReportData = {
    schema: "report/1",
    title,
    lines: content.subjects.map(packSubject),
    binary: content.binary,
  };
  const lines = content.subjects.map(({ line }) => lineLabel(line.name)).join(", ");
  // "<" is written so that no text can end the block.
  const json = JSON.stringify(data).replaceAll("<", "\\u003c");
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="generator" content="${SOFTWARE} ${escapeMarkup(version)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escapeMarkup(title)}: velocity maps</title>
<link rel="icon" href="data:,">
<style id="fonts">${pageFonts()}</style>
<style>${pageStyle}</style>
</head>
<body>
<header>
<h1>${escapeMarkup(title)}</h1>
<p>${escapeMarkup(lines)}</p>
</header>
<main>
${exploreSection(content)}
${resultsSection(content.results)}
${checklistSection(content.checklist)}
${madeSection(content)}
</main>
<footer>Written by ${SOFTWARE} ${
    escapeMarkup(version)
  }. Everything on this page is in this one file.</footer>
<script type="application/json" id="report-data">${json}</script>
<script>${pageScript}</script>
</body>
</html>
`;
}

function packSubject(subject: ReportSubject): ReportLine {
  const { line, systemic_kms, grid, sources = [], maps } = subject;
  const { rows, columns, first_kms, step_kms } = grid;
  return {
    name: line.name,
    air_angstrom: line.air_angstrom,
    systemic_kms,
    rows,
    columns,
    first_kms,
    step_kms,
    phase: Array.from(grid.phase, (value) => Number(value.toFixed(6))),
    phase_width: Array.from(grid.phase_width, (value) => Number(value.toFixed(6))),
    sources,
    flux: packArray(grid.flux),
    error: packArray(grid.error),
    maps: maps.map(({ method, map, model, residual, reduced_chi_square, features = [] }) => ({
      method,
      pixels: map.pixels,
      half_width_kms: map.half_width_kms,
      reduced_chi_square,
      intensity: packArray(map.intensity),
      model: packArray(model),
      residual: packArray(residual),
      features: features.map(({ vx_kms, vy_kms, vx_error_kms, vy_error_kms, correlation }) => ({
        vx_kms,
        vy_kms,
        vx_error_kms: vx_error_kms ?? null,
        vy_error_kms: vy_error_kms ?? null,
        correlation: correlation ?? 0,
      })),
    })),
  };
}
