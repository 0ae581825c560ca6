import { VERSION } from "../version.ts";
import type { GatheredRun } from "./gather_job.ts";
import {
  address,
  failureText,
  htmlText,
  indexCard,
  type PageTools,
  type ShownRun,
} from "./index_card.ts";
import { indexStyle } from "./index_style.ts";
import type { SummaryRow } from "./summary_tables.ts";

/** What the page of a batch shows. */
export interface IndexContent {
  /** Title. */
  readonly title: string;
  /** The treatments in order, those of one target beside each other. */
  readonly runs: readonly GatheredRun[];
  /** Their rows of the summary. */
  readonly rows: readonly (readonly SummaryRow[])[];
  /** Files of the sample plates. */
  readonly sample_files: readonly string[];
}

/**
 * `index.html`: what has become of every target, with pictures that open the reports. Pictures are
 * loaded from the folders beside it; nothing comes from a network.
 *
 * @param content What it shows.
 * @returns HTML; the same content gives the same bytes.
 */
export async function indexPage(content: IndexContent): Promise<string> {
  const { labelHtml, lineLabel, measuredText, pageFonts } = await import("../../figures/mod.ts");
  const tools = { labelHtml, lineLabel, measuredText };
  const { title } = content;
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="generator" content="Millrace ${VERSION}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${htmlText(title)}</title>
<link rel="icon" href="data:,">
<style>${pageFonts()}</style>
<style>${indexStyle}</style>
</head>
<body>
<header>
<h1>${htmlText(title)}</h1>
<p>${counts(content.runs)}. Tables: <a href="summary.csv">summary.csv</a>,
<a href="summary.ecsv">summary.ecsv</a>; the run: <a href="batch.json">batch.json</a>.</p>
</header>
<main>
${undone(content.runs)}
${plates(content.sample_files)}
${cards(content, tools)}
</main>
<footer>Written by Millrace ${VERSION}. A picture opens the target's report.</footer>
</body>
</html>
`;
}

/** How many targets are done and how many are not, in words. */
function counts(runs: readonly GatheredRun[]): string {
  const names = new Set(runs.map(({ name }) => name));
  const not = (status: GatheredRun["status"]) =>
    new Set(runs.filter((run) => run.status === status).map(({ name }) => name));
  const failed = not("failed");
  const missing = [...not("missing")].filter((name) => !failed.has(name));
  const done = names.size - failed.size - missing.length;
  return [
    `${names.size} target${names.size === 1 ? "" : "s"}: ${done} done`,
    ...(failed.size > 0 ? [`${failed.size} failed`] : []),
    ...(missing.length > 0 ? [`${missing.length} missing`] : []),
  ].join(", ");
}

/** What is not done: a row for each failure, and one for all of which nothing is there yet. */
function undone(runs: readonly GatheredRun[]): string {
  const nothing = runs.filter(({ steps, error }) =>
    error === null && steps.every(({ status }) => status === "missing")
  );
  const rest = runs.filter((run) => run.status !== "done" && !nothing.includes(run));
  if (nothing.length + rest.length === 0) return "";
  const name = (run: GatheredRun) =>
    htmlText(run.title + (run.variant === null ? "" : `, ${run.variant}`));
  const rows = rest.map((run) =>
    `<tr><td class="${run.status}">${name(run)}</td><td>${htmlText(run.path)}</td>` +
    `<td>${failureText(run)}</td></tr>`
  );
  const more = nothing.length === 0
    ? ""
    : `<p><span class="missing">Not begun</span>, or to be made again: ${
      nothing.map(name).join("; ")
    }.</p>`;
  const table = rows.length === 0 ? "" : `<div class="scroll"><table>
<tr><th>target</th><th>file</th><th>why</th></tr>
${rows.join("\n")}
</table></div>`;
  return `<h2>Not done</h2>\n${table}${more}`;
}

function plates(files: readonly string[]): string {
  const shown = files.filter((file) => /\.(png|svg)$/.test(file));
  const names = [...new Set(shown.map((file) => file.replace(/\.\w+$/, "")))];
  if (names.length === 0) return "";
  return `<h2>Side by side</h2>
<div class="plates">
${
    names.map((name) => {
      const all = files.filter((file) => file.replace(/\.\w+$/, "") === name);
      const image = shown.find((file) => file === `${name}.png`) ?? `${name}.svg`;
      const links = all.map((file) =>
        `<a href="${address(file)}">${htmlText(file.replace(/^.*\./, ""))}</a>`
      ).join(", ");
      return `<figure><a href="${address(image)}"><img src="${address(image)}" alt="${
        htmlText(name)
      }: velocity maps of many targets" loading="lazy"></a><figcaption>${
        htmlText(name)
      }: ${links}</figcaption></figure>`;
    }).join("\n")
  }
</div>`;
}

function cards(content: IndexContent, tools: PageTools): string {
  const targets = new Map<string, ShownRun[]>();
  content.runs.forEach((run, i) => {
    const shown = { run, rows: content.rows[i] ?? [] };
    targets.set(run.name, [...targets.get(run.name) ?? [], shown]);
  });
  return `<h2>Targets</h2>
<div class="cards">
${[...targets.values()].map((shown) => indexCard(shown, tools)).join("\n")}
</div>`;
}
