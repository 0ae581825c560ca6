import type { PanelEntry } from "../figures/mod.ts";
import type { WeighedLine } from "../weighing/mod.ts";
import { figureFiles } from "./figure_files.ts";
import { plateName } from "./plate_figures.ts";
import type { Session } from "./session.ts";
import { weighSubjects } from "./subject/weigh_subject.ts";

/** Trails side by side in a row. */
const COLUMNS = 4;
/** Height of a row of trails, mm. */
const ROW_MM = 36;
/** Height of the row below them, mm. */
const LAST_ROW_MM = 54;

/**
 * Draws `weigh-plate` for each weighed line: the data, the model whose every part is needed, what each
 * hypothesis leaves of the data, the distribution of the null hypothesis with the observed gain, the
 * detection limit, and profiles with the model underneath.
 *
 * @param session The target at work.
 * @param weighed The weighed lines.
 * @returns Names and contents of the files.
 */
export async function weighFigures(
  session: Pick<Session, "target" | "binary">,
  weighed: readonly WeighedLine[],
): Promise<[name: string, data: Uint8Array | string][]> {
  const { drawPlate } = await import("../figures/mod.ts");
  const { target } = session;
  const { plate, orbit } = target.settings;
  const { colour_map, signed_colour_map, stretch } = plate;
  // On another zero the binary stands turned by an unknown angle: nothing of it is marked.
  const binary = orbit.zero_marks === "emission-crossing" ? null : session.binary();
  const common = { title: plate.title ?? target.title, binary };
  const files: [string, Uint8Array | string][] = [];
  for (const [i, line] of weighed.entries()) {
    const { best, rivals } = weighSubjects(line, common);
    const trails: PanelEntry[] = [
      { panel: "trail", subject: 0 },
      { panel: "model", subject: 0 },
      ...rivals.map((_, k): PanelEntry => ({ panel: "residual", subject: k + 1 })),
    ];
    const rows: { panels: PanelEntry[]; height_mm: number }[] = [];
    for (let k = 0; k < trails.length; k += COLUMNS) {
      rows.push({ panels: trails.slice(k, k + COLUMNS), height_mm: ROW_MM });
    }
    const last: PanelEntry[] = [{ panel: "stacked-profiles" }];
    if (best.detection_limit !== undefined) last.unshift({ panel: "detection-limit" });
    if (best.null_distribution !== undefined) {
      // As wide as two trails: it fills a row that they leave half empty.
      const free = COLUMNS - rows.at(-1)!.panels.length >= 2;
      (free ? rows.at(-1)!.panels : last).push({ panel: "null-distribution" });
    }
    rows.push({ panels: last, height_mm: LAST_ROW_MM });
    const style = { colour_map, signed_colour_map, stretch };
    const drawn = drawPlate(
      { ...style, width: plate.width, letters: true, rows } as Parameters<typeof drawPlate>[0],
      [best, ...rivals],
    );
    const name = plateName("weigh-plate", { line: line.trail.line.name, first: i === 0 });
    files.push(...await figureFiles(drawn, { name, plate }));
  }
  return files;
}
