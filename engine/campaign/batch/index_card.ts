import type { EcsvValue } from "../../files/mod.ts";
import type { labelHtml, lineLabel, measuredText } from "../../figures/mod.ts";
import type { GatheredRun } from "./gather_job.ts";
import { THUMBNAIL_FILE } from "./run_thumbnail.ts";
import { summaryColumns } from "./summary_columns.ts";
import type { SummaryRow } from "./summary_tables.ts";

/** Parts of the figures room that the page needs: loaded with the fonts, once. */
export interface PageTools {
  /** Markup of a label as HTML; text is escaped. */
  readonly labelHtml: typeof labelHtml;
  /** Name of a line as papers print it. */
  readonly lineLabel: typeof lineLabel;
  /** A value with its error. */
  readonly measuredText: typeof measuredText;
}

/** A treatment with its rows of the summary. */
export interface ShownRun {
  /** The treatment. */
  readonly run: GatheredRun;
  /** Its rows. */
  readonly rows: readonly SummaryRow[];
}

/** Files that open when a picture is clicked, the best first. */
const REPORTS = ["report.html", "plate.svg", "plate.pdf", "plate.png", "map.json"];

/** Escapes text for HTML. */
export function htmlText(text: string): string {
  return text.replace(
    /[&<>"']/g,
    (letter) => `&#${letter.charCodeAt(0)};`,
  );
}

/** A path as an address: each part encoded. */
export function address(...parts: readonly string[]): string {
  return parts.join("/").split("/").map(encodeURIComponent).join("/");
}

/**
 * The card of one target: a picture for each treatment that opens its report, and what was found.
 *
 * @param shown Its treatments, the target's own first.
 * @param tools From the figures room.
 * @returns HTML.
 */
export function indexCard(shown: readonly ShownRun[], tools: PageTools): string {
  const { run } = shown[0]!;
  return `<article class="card">
<div class="pictures">${shown.map((one) => picture(one.run)).join("")}</div>
<h3>${htmlText(run.title)}</h3>
${shown.flatMap((one) => facts(one, tools)).map((fact) => `<p>${fact}</p>`).join("\n")}
</article>`;
}

function picture({ folder, files, title, variant, status, steps }: GatheredRun): string {
  const label = variant === null ? "" : `<span>${htmlText(variant)}</span>`;
  const report = REPORTS.find((file) => files.includes(file));
  const alt = htmlText(`${title}${variant === null ? "" : `, ${variant}`}: velocity map`);
  const asked = steps.some(({ command }) => command === "thumbnail");
  if (variant === null && !asked && report === undefined) return "";
  const inner = files.includes(THUMBNAIL_FILE)
    ? `<img src="${address(folder, THUMBNAIL_FILE)}" alt="${alt}" loading="lazy">`
    : `<div class="none">${status === "done" ? "no map" : status}</div>`;
  return report === undefined
    ? `<div>${inner}${label}</div>`
    : `<a href="${address(folder, report)}">${inner}${label}</a>`;
}

function facts({ run, rows }: ShownRun, tools: PageTools): string[] {
  const { labelHtml, lineLabel, measuredText } = tools;
  const found: string[] = [];
  const mark = run.variant === null ? "" : `${htmlText(run.variant)}: `;
  if (run.status !== "done") {
    found.push(`<span class="${run.status}">${mark}${failureText(run)}</span>`);
  }
  const first = rows[0];
  const measured = (name: string, row: SummaryRow) => {
    const value = cell(row, name);
    const error = cell(row, name.replace("_kms", "_error_kms").replace(/^mass_ratio$/, "$&_error"));
    return typeof value === "number"
      ? measuredText(value, typeof error === "number" ? error : null)
      : null;
  };
  if (first !== undefined) {
    const parts = ([
      ["*K*_{1}", "k_accretor_kms"],
      ["*K*_{2}", "k_donor_kms"],
      ["*γ*", "systemic_kms"],
      ["*q*", "mass_ratio"],
    ] as const).flatMap(([label, name]) => {
      const text = measured(name, first);
      return text === null ? [] : [`${labelHtml(label)} ${text}`];
    });
    if (parts.length > 0) found.push(mark + parts.join(", "));
  }
  for (const row of rows) {
    const vx = measured("feature_vx_kms", row);
    const line = cell(row, "line");
    const name = typeof line === "string" ? htmlText(lineLabel(line)) : "";
    const nearest = cell(row, "feature_nearest");
    const verdict = cell(row, "verdict");
    const said = [
      ...(vx === null ? [] : [
        `(${vx}, ${measured("feature_vy_kms", row)})${
          typeof nearest === "string" && nearest !== "none" ? ` ${htmlText(nearest)}` : ""
        }`,
      ]),
      ...(typeof verdict === "string" ? [htmlText(verdict)] : []),
    ];
    if (said.length > 0) found.push(`${mark}${name} <span class="quiet">${said.join("; ")}</span>`);
  }
  return found;
}

/** Why a treatment is not done, in words. */
export function failureText(run: GatheredRun): string {
  const missing = run.steps.filter(({ status }) => status === "missing");
  if (run.error !== null) return htmlText(run.error.message);
  return `not made: ${missing.map(({ command }) => command).join(", ")}`;
}

function cell(row: SummaryRow, name: string): EcsvValue {
  return row[summaryColumns.findIndex((column) => column.name === name)] ?? null;
}
